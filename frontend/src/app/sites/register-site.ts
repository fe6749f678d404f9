import { ChangeDetectionStrategy, Component, computed, inject, input, output, signal } from '@angular/core';
import { toSignal } from '@angular/core/rxjs-interop';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { map, startWith } from 'rxjs';
import * as z from 'zod';
import { type Clock, CLOCK_ROUTES } from '#shared/contract/clock-routes';
import { code } from '#shared/contract/leaves';
import { between, nameOrEmpty } from '#shared/contract/setup-leaves';
import { type Site, SITE_ROUTES } from '#shared/contract/site-routes';
import { geodeticToItrs } from '#shared/earth/ellipsoid';
import { type Scale, SCALES } from '#shared/time/scales';
import { ApiClient } from '../api/api-client';
import { Field } from '../ui/field';
import { numberIn, numberTyped } from '../ui/number-typed';
import { Segmented } from '../ui/segmented';
import { Sending } from '../ui/sending';
import { zodValidator } from '../ui/zod-validator';

const number = (schema: z.ZodType, typed = '') =>
  new FormControl(typed, { nonNullable: true, validators: zodValidator(schema, numberTyped) });
const text = (schema: z.ZodType, typed = '') => new FormControl(typed, { nonNullable: true, validators: zodValidator(schema) });

/** The form that registers a site, with the clock that it keeps time by and how sure that is. */
@Component({
  selector: 'sw-register-site',
  imports: [Field, ReactiveFormsModule, Segmented],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './register-site.html',
  styleUrl: './register-site.scss',
})
export class RegisterSite {
  private readonly api = inject(ApiClient);
  readonly networkId = input.required<number>();
  readonly heading = input('Register a site');
  readonly registered = output<Site>();

  protected readonly form = new FormGroup({
    code: text(code()),
    name: text(nameOrEmpty()),
    latitudeDeg: number(between(-90, 90, 'degrees')),
    longitudeDeg: number(between(-360, 360, 'degrees')),
    heightM: number(between(-12_000, 100_000, 'metres')),
    positionSigmaM: number(between(0, 1e6, 'metres')),
    delayNs: number(between(-1e9, 1e9, 'nanoseconds')),
    delaySigmaNs: number(between(0, 1e9, 'nanoseconds')),
    offsetNs: number(between(-1e15, 1e15, 'nanoseconds'), '0'),
    offsetSigmaNs: number(between(0, 1e15, 'nanoseconds')),
    rateNsPerDay: number(between(-8e12, 8e12, 'nanoseconds a day'), '0'),
    rateSigmaNsPerDay: number(between(0, 8e12, 'nanoseconds a day')),
    since: text(z.string({ error: 'a time' }).min(1, 'a time such as 2027-03-01T00:00:00 UTC')),
  });
  protected readonly sending = new Sending(this.form);
  protected readonly scale = signal<Scale>('UTC');
  protected readonly scales = SCALES.map((scale) => ({ value: scale, word: scale }));
  private readonly typed = toSignal(this.form.valueChanges.pipe(map(() => this.form.getRawValue()), startWith(this.form.getRawValue()))); // prettier-ignore

  protected readonly act = computed(() => (this.typed()?.code.trim() ? `Register ${this.typed()?.code.trim()}` : 'Register the site')); // prettier-ignore
  /** Where that is in the Earth-fixed frame, as soon as it can be said. */
  protected readonly itrs = computed(() => {
    this.typed();
    const { latitudeDeg, longitudeDeg, heightM } = this.form.controls;
    if (latitudeDeg.invalid || longitudeDeg.invalid || heightM.invalid) return '';
    const place = {
      latitudeDeg: numberIn(latitudeDeg.value),
      longitudeDeg: numberIn(longitudeDeg.value),
      heightM: numberIn(heightM.value),
    };
    return geodeticToItrs(place).map(grouped).join(', ');
  });
  /** The clock of a site that was refused after it: it is not made twice. */
  private clock: Clock | undefined;

  protected register(): Promise<boolean> {
    const given = this.form.getRawValue();
    return this.sending.send(async () => {
      this.clock ??= await this.api.call(CLOCK_ROUTES.makeClock, {
        params: { networkId: this.networkId() },
        body: {
          code: given.code,
          segments: [
            {
              from: given.since,
              offsetNs: numberIn(given.offsetNs),
              offsetSigmaNs: numberIn(given.offsetSigmaNs),
              rateNsPerDay: numberIn(given.rateNsPerDay),
              rateSigmaNsPerDay: numberIn(given.rateSigmaNsPerDay),
              origin: 'by-hand',
            },
          ],
        },
      });
      const site = await this.api.call(SITE_ROUTES.makeSite, {
        params: { networkId: this.networkId() },
        body: {
          code: given.code,
          name: given.name,
          state: {
            from: null,
            scale: this.scale(),
            clockId: this.clock.id,
            exactClock: false,
            position: {
              geodetic: {
                latitudeDeg: numberIn(given.latitudeDeg),
                longitudeDeg: numberIn(given.longitudeDeg),
                heightM: numberIn(given.heightM),
              },
            },
            positionSigmaM: numberIn(given.positionSigmaM),
            delayNs: numberIn(given.delayNs),
            delaySigmaNs: numberIn(given.delaySigmaNs),
            readingSigmaNs: null,
            origin: 'by-hand',
            note: '',
          },
        },
      });
      this.clock = undefined;
      this.form.reset();
      this.registered.emit(site);
    });
  }
}

/** Metres to the decimetre, in threes by thin gaps, with a true minus. */
const grouped = (metres: number): string => {
  const [whole = '', decimals = ''] = Math.abs(metres).toFixed(1).split('.');
  return `${metres < 0 ? '\u2212' : ''}${whole.replace(/\B(?=(\d{3})+$)/g, '\u202f')}.${decimals}`;
};
