import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { RouterLink } from '@angular/router';
import { type EventInFull, type EventVersion } from '#shared/contract/event-routes';
import { plain, signed, timeText, withUnit } from '../desk/figures';
import { InstantMark } from '../instants/instant';

const FORMS: Readonly<Record<EventInFull['record']['readingForm'], string>> = {
  iso: 'date and time',
  'tai-pair': 'seconds and fraction of TAI',
  'gps-week': 'week and seconds of GPS',
  mjd: 'modified Julian date',
  unix: 'seconds since 1970',
};
const ORIGINS: Readonly<Record<EventVersion['sigmaOrigin'], string>> = {
  record: 'written with the reading',
  site: 'stated for the site',
  resolution: 'by its last digit',
};

/** From what a site wrote to the event, step by step: scale, cable delay, clock offset and drift, each with its error. */
@Component({
  selector: 'sw-reading-steps',
  imports: [InstantMark, RouterLink],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './reading-steps.html',
  styleUrl: './reading-steps.scss',
})
export class ReadingSteps {
  readonly of = input.required<EventInFull>();
  readonly siteName = input.required<string>();
  protected readonly form = computed(() => FORMS[this.of().record.readingForm]);
  protected readonly errors = computed(() => new Map(this.of().current?.terms.map(({ name, sigmaNs }) => [name, sigmaNs])));
  protected readonly extras = computed(() => Object.entries(this.of().record.extra));
  protected readonly origin = (from: EventVersion['sigmaOrigin']): string => ORIGINS[from];
  protected readonly time = timeText;

  /** What is taken off, with the sign that it then has: the delay of 153 280 ns makes the instant earlier. */
  protected takenOff(ns: number): string {
    return withUnit(signed(ns === 0 ? 0 : -ns, 1), 'ns');
  }

  protected error(name: 'reading' | 'delay' | 'clock' | 'reference'): string {
    return `\u00b1 ${timeText(this.errors().get(name) ?? 0)}`;
  }

  protected days(value: number): string {
    return plain(value, 6);
  }

  protected rate(nsPerDay: number): string {
    return `${signed(nsPerDay, 2)} ns per day`;
  }

  protected place([x, y, z]: readonly number[]): string {
    return [x, y, z].map((value) => plain(value ?? 0, 1)).join(', ');
  }
}
