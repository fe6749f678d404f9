import { ChangeDetectionStrategy, Component, computed, inject, input, linkedSignal, type OnInit, output, signal } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { type Clock, CLOCK_ROUTES, type ClockSegmentShown, REFERENCE_ROUTES, type TimeReference } from '#shared/contract/clock-routes';
import { between, setupNote, timeGiven, type Warning } from '#shared/contract/setup-leaves';
import { allOf } from '../api/all-of';
import { ApiClient } from '../api/api-client';
import { typedInstant } from '../instants/typed-instant';
import { Preferences } from '../preferences/preferences';
import { numberControl, textControl } from '../ui/controls';
import { Field } from '../ui/field';
import { FigurePipe } from '../ui/figure';
import { Meanwhile } from '../ui/meanwhile';
import { MeanwhileNote } from '../ui/meanwhile-note';
import { numberIn } from '../ui/number-typed';
import { Sending } from '../ui/sending';
import { recordWords } from './segment-words';

const ORIGINS = ['by-hand', 'certificate', 'import'] as const;

/** A clock whose record was changed, and what the server said of that. */
export interface ClockTold {
  readonly clock: Clock;
  readonly effects: readonly string[];
  readonly warnings: readonly Warning[];
}

/** The form that adds a segment to a clock record, or states one anew. */
@Component({
  selector: 'sw-segment-form',
  imports: [Field, FigurePipe, MeanwhileNote, ReactiveFormsModule],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './segment-form.html',
})
export class SegmentForm implements OnInit {
  private readonly api = inject(ApiClient);
  private readonly preferences = inject(Preferences);
  readonly clock = input.required<Clock>();
  /** The segment that is stated anew; none for a new one. */
  readonly segment = input<ClockSegmentShown | undefined>();
  readonly told = output<ClockTold>();
  readonly closed = output();

  private readonly seen = linkedSignal(() => this.clock());
  protected readonly references = signal<readonly TimeReference[]>([]);
  protected readonly origins = ORIGINS.map((value) => ({ value, word: value === 'by-hand' ? 'by hand' : `by ${value}` }));
  protected readonly heading = computed(() => (this.segment() ? 'State the segment anew' : 'Add a clock segment'));
  protected readonly form = new FormGroup({
    from: textControl(timeGiven()),
    offsetNs: numberControl(between(-1e15, 1e15, 'nanoseconds'), '0'),
    offsetSigmaNs: numberControl(between(0, 1e15, 'nanoseconds')),
    rateNsPerDay: numberControl(between(-8.64e12, 8.64e12, 'nanoseconds a day'), '0'),
    rateSigmaNsPerDay: numberControl(between(0, 8.64e12, 'nanoseconds a day')),
    referenceId: new FormControl<number | null>(null),
    origin: new FormControl<(typeof ORIGINS)[number]>('by-hand', { nonNullable: true }),
    note: textControl(setupNote()),
  });
  protected readonly sending = new Sending(this.form);
  protected readonly meanwhile = new Meanwhile<Clock>(
    () => this.api.call(CLOCK_ROUTES.readClock, { params: { clockId: this.clock().id } }),
    (clock) => recordWords(clock, this.preferences.scale()),
  );

  ngOnInit(): void {
    const segment = this.segment();
    if (segment)
      this.form.setValue({
        from: typedInstant(segment.from, this.preferences.scale()),
        offsetNs: String(segment.offsetNs),
        offsetSigmaNs: String(segment.offsetSigmaNs),
        rateNsPerDay: String(segment.rateNsPerDay),
        rateSigmaNsPerDay: String(segment.rateSigmaNsPerDay),
        referenceId: segment.referenceId,
        origin: ORIGINS.find((origin) => origin === segment.origin) ?? 'by-hand',
        note: segment.note,
      });
    void this.loadReferences();
  }

  /** Without the list the form does all else. */
  private async loadReferences(): Promise<void> {
    const params = { networkId: this.clock().networkId };
    this.references.set(await allOf((query) => this.api.call(REFERENCE_ROUTES.listReferences, { params, query })).catch(() => []));
  }

  protected send(): Promise<boolean> {
    return this.sending.send(() =>
      this.meanwhile.around(
        this.seen(),
        async () => {
          const { effects, warnings, ...clock } = await this.state();
          this.told.emit({ clock, effects, warnings });
        },
        (fresh) => this.seen.set(fresh),
      ),
    );
  }

  private state() {
    const given = this.form.getRawValue();
    const { id: clockId, version } = this.seen();
    const segment = this.segment();
    const body = {
      from: given.from,
      // What was measured at another instant than the segment's first, and how the two errors hang together, stays as it was stated.
      ...(segment && { covarianceNs2PerDay: segment.covarianceNs2PerDay, ...(!this.form.controls.from.dirty && { from: segment.from, at: segment.at }) }), // prettier-ignore
      offsetNs: numberIn(given.offsetNs),
      offsetSigmaNs: numberIn(given.offsetSigmaNs),
      rateNsPerDay: numberIn(given.rateNsPerDay),
      rateSigmaNsPerDay: numberIn(given.rateSigmaNsPerDay),
      referenceId: given.referenceId,
      origin: given.origin,
      note: given.note,
      version,
    };
    return segment
      ? this.api.call(CLOCK_ROUTES.editSegment, { params: { clockId, segment: segment.segment }, body })
      : this.api.call(CLOCK_ROUTES.addSegment, { params: { clockId }, body });
  }
}
