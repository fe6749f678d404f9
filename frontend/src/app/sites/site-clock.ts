import { ChangeDetectionStrategy, Component, effect, inject, input, signal, untracked } from '@angular/core';
import { type Clock, CLOCK_ROUTES, type ClockSegmentShown } from '#shared/contract/clock-routes';
import { ApiClient } from '../api/api-client';
import { sentenceOf } from '../api/api-problem';
import { type ClockTold, SegmentForm } from '../clocks/segment-form';
import { InstantMark } from '../instants/instant';
import { NetworkStore } from '../networks/network-store';
import { SessionStore } from '../session/session-store';
import { Term } from '../terms/term';
import { FigurePipe } from '../ui/figure';
import { Loader } from '../ui/loaded';
import { Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { Told } from '../ui/told';
import { siteCodes } from './site-codes';

/** The clock record by which a site keeps time: every segment in force, and the forms that change them. */
@Component({
  selector: 'sw-site-clock',
  imports: [Fault, FigurePipe, InstantMark, SegmentForm, Skeleton, Term, Told],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './site-clock.html',
  styles: `
    sw-segment-form,
    .add {
      display: block;
      margin-top: 14px;
    }
  `,
})
export class SiteClock {
  private readonly api = inject(ApiClient);
  private readonly toasts = inject(ToastStore);
  private readonly networks = inject(NetworkStore);
  protected readonly session = inject(SessionStore);
  readonly clockId = input.required<number>();
  readonly siteId = input.required<number>();
  protected readonly clock = new Loader<Clock>(() => this.api.call(CLOCK_ROUTES.readClock, { params: { clockId: this.clockId() } }));
  /** The form that is open, and the segment that it states anew. */
  protected readonly form = signal<{ readonly segment: ClockSegmentShown | undefined } | undefined>(undefined);
  protected readonly told = signal<ClockTold | undefined>(undefined);

  constructor() {
    effect(() => {
      this.clockId();
      untracked(() => void this.clock.load());
    });
  }

  /** The other sites that keep time by it. */
  protected also({ siteIds }: Clock): string {
    const others = siteIds.filter((id) => id !== this.siteId());
    return siteCodes(others, this.networks.sites.value() ?? []);
  }

  protected changed(told: ClockTold): void {
    this.form.set(undefined);
    this.told.set(told);
    this.clock.update(() => told.clock);
    this.toasts.say(`Clock record of ${told.clock.code} changed.`);
  }

  /** Takes a segment out of the record; for a while it can be put in again. */
  protected async end(clock: Clock, segment: ClockSegmentShown): Promise<void> {
    await this.do(async () => {
      const params = { clockId: clock.id, segment: segment.segment };
      const { effects, warnings, ...ended } = await this.api.call(CLOCK_ROUTES.endSegment, { params, body: { version: clock.version } });
      this.form.set(undefined);
      this.told.set({ clock: ended, effects, warnings });
      this.clock.update(() => ended);
      this.toasts.say(`Segment taken out of ${clock.code}.`, () => this.putBack(ended, segment));
    });
  }

  private async putBack({ id: clockId, version }: Clock, segment: ClockSegmentShown): Promise<void> {
    const { from, at, offsetNs, offsetSigmaNs, rateNsPerDay, rateSigmaNsPerDay, covarianceNs2PerDay, referenceId, origin, note } = segment;
    await this.do(async () => {
      const body = {
        ...{ from, at, offsetNs, offsetSigmaNs, rateNsPerDay, rateSigmaNsPerDay, covarianceNs2PerDay, referenceId, note, version },
        origin: origin === 'fit' ? ('import' as const) : origin, // a fit is stated by the program alone
      };
      const { record, ...clock } = await this.api.call(CLOCK_ROUTES.addSegment, { params: { clockId }, body });
      this.told.set(undefined);
      this.clock.update((before) => ({ ...before, record, version: clock.version }));
      this.toasts.say('Segment put in again.');
    });
  }

  private async do(act: () => Promise<void>): Promise<void> {
    try {
      await act();
    } catch (fault) {
      this.toasts.fail(sentenceOf(fault));
    }
  }
}
