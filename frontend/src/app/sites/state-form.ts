import { ChangeDetectionStrategy, Component, computed, inject, input, linkedSignal, type OnInit, output, signal } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import * as z from 'zod';
import { CLOCK_ROUTES } from '#shared/contract/clock-routes';
import { between, setupNote, timeGiven, type Warning } from '#shared/contract/setup-leaves';
import { type Site, SITE_ROUTES, type SiteVersion } from '#shared/contract/site-routes';
import { type Scale, SCALES } from '#shared/time/scales';
import { allOf } from '../api/all-of';
import { ApiClient } from '../api/api-client';
import { typedInstant } from '../instants/typed-instant';
import { Preferences } from '../preferences/preferences';
import { numberControl, numberOrEmpty, textControl } from '../ui/controls';
import { Field } from '../ui/field';
import { Meanwhile } from '../ui/meanwhile';
import { MeanwhileNote } from '../ui/meanwhile-note';
import { numberIn } from '../ui/number-typed';
import { Segmented } from '../ui/segmented';
import { Sending } from '../ui/sending';
import { fromWords, siteWords } from './state-words';

const ORIGINS = ['by-hand', 'survey', 'certificate', 'fit', 'import'] as const;

/** A site that was given a new state, and what is doubtful about that. */
export interface SiteTold {
  readonly site: Site;
  readonly warnings: readonly Warning[];
}

/** The form that states by what a site's readings are reconciled from some instant on: place, clock, scale, delay, and their errors. */
@Component({
  selector: 'sw-site-state-form',
  imports: [Field, MeanwhileNote, ReactiveFormsModule, Segmented],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './state-form.html',
  styleUrl: './register-site.scss',
})
export class SiteStateForm implements OnInit {
  private readonly api = inject(ApiClient);
  private readonly preferences = inject(Preferences);
  readonly site = input.required<Site>();
  readonly told = output<SiteTold>();
  readonly closed = output();

  private readonly seen = linkedSignal(() => this.site());
  /** States in force, whose place the new one can take. */
  protected readonly inForce = computed(() => this.seen().versions.filter(({ supersededAt }) => supersededAt === null));
  protected readonly clocks = signal<readonly { readonly id: number; readonly code: string }[]>([]);
  protected readonly scale = signal<Scale>('UTC');
  protected readonly scales = SCALES.map((scale) => ({ value: scale, word: scale }));
  protected readonly origins = ORIGINS.map((value) => ({ value, word: value === 'by-hand' ? 'by hand' : `by ${value}` }));
  protected readonly form = new FormGroup({
    replaces: new FormControl<number | null>(null),
    from: textControl(z.union([z.literal(''), timeGiven()])),
    latitudeDeg: numberControl(between(-90, 90, 'degrees')),
    longitudeDeg: numberControl(between(-360, 360, 'degrees')),
    heightM: numberControl(between(-12_000, 100_000, 'metres')),
    positionSigmaM: numberControl(between(0, 1e6, 'metres')),
    clockId: new FormControl<number | null>(null),
    delayNs: numberControl(between(-1e9, 1e9, 'nanoseconds')),
    delaySigmaNs: numberControl(between(0, 1e9, 'nanoseconds')),
    readingSigmaNs: numberOrEmpty(between(0, 1e9, 'nanoseconds')),
    origin: new FormControl<(typeof ORIGINS)[number]>('by-hand', { nonNullable: true }),
    note: textControl(setupNote()),
  });
  protected readonly sending = new Sending(this.form);
  protected readonly meanwhile = new Meanwhile<Site>(
    () => this.api.call(SITE_ROUTES.readSite, { params: { siteId: this.site().id } }),
    (site) => siteWords(site, this.preferences.scale()),
  );

  ngOnInit(): void {
    this.fill(this.site().now ?? this.inForce()[0]);
    const params = { networkId: this.site().networkId };
    void allOf((query) => this.api.call(CLOCK_ROUTES.listClocks, { params, query }))
      .catch(() => [])
      .then((clocks) => this.clocks.set(clocks));
  }

  /** Everything but when it begins is as in a state that is there, so that only what is other has to be typed. */
  private fill(state: SiteVersion | undefined): void {
    if (!state) return;
    const geodetic = state.position?.geodetic;
    this.scale.set(SCALES.find((scale) => scale === state.scale) ?? 'UTC');
    this.form.patchValue({
      latitudeDeg: textOf(geodetic?.latitudeDeg),
      longitudeDeg: textOf(geodetic?.longitudeDeg),
      heightM: textOf(geodetic?.heightM),
      positionSigmaM: textOf(state.positionSigmaM),
      clockId: state.clockId,
      delayNs: textOf(state.delayNs),
      delaySigmaNs: textOf(state.delaySigmaNs),
      readingSigmaNs: textOf(state.readingSigmaNs),
      origin: state.origin,
    });
  }

  /** Whose place it takes: also when it begins is then as there. */
  protected takePlaceOf(number: number | null): void {
    const state = this.inForce().find((one) => one.number === number);
    this.fill(state);
    const { from } = this.form.controls;
    from.setValue(state?.from ? typedInstant(state.from, this.preferences.scale()) : '');
    from.markAsPristine();
  }

  protected words(state: SiteVersion): string {
    return fromWords(state, this.preferences.scale());
  }

  protected send(): Promise<boolean> {
    return this.sending.send(() =>
      this.meanwhile.around(
        this.seen(),
        async () => {
          const params = { siteId: this.site().id };
          const { warnings, ...site } = await this.api.call(SITE_ROUTES.addSiteVersion, { params, body: this.body() });
          this.told.emit({ site, warnings });
        },
        (fresh) => this.seen.set(fresh),
      ),
    );
  }

  private body() {
    const given = this.form.getRawValue();
    const replaced = this.inForce().find(({ number }) => number === given.replaces);
    const stays = !this.form.controls.from.dirty && replaced !== undefined;
    return {
      from: stays ? replaced.from : given.from === '' ? null : given.from,
      scale: this.scale(),
      clockId: given.clockId,
      exactClock: given.clockId === null,
      position: this.position(),
      positionSigmaM: numberIn(given.positionSigmaM),
      delayNs: numberIn(given.delayNs),
      delaySigmaNs: numberIn(given.delaySigmaNs),
      readingSigmaNs: given.readingSigmaNs.trim() === '' ? null : numberIn(given.readingSigmaNs),
      origin: given.origin,
      note: given.note,
      ...(given.replaces !== null && { replaces: given.replaces }),
      version: this.seen().version,
    };
  }

  /** A place that was stated as Earth-fixed numbers stays exact while nobody types another. */
  private position() {
    const { latitudeDeg, longitudeDeg, heightM } = this.form.controls;
    const now = this.site().now?.position;
    if (now?.stated === 'itrs' && ![latitudeDeg, longitudeDeg, heightM].some(({ dirty }) => dirty)) return { itrsM: now.itrsM };
    const [latitude, longitude, height] = [latitudeDeg, longitudeDeg, heightM].map(({ value }) => numberIn(value));
    return { geodetic: { latitudeDeg: latitude ?? 0, longitudeDeg: longitude ?? 0, heightM: height ?? 0 } };
  }
}

const textOf = (value: number | null | undefined): string => (value == null ? '' : String(value));
