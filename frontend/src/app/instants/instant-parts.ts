import { type Instant } from '#shared/time/instant';
import { timeText } from '#shared/time/format';
import { type Scale } from '#shared/time/scales';
import { LEAP_SECONDS } from './server-instant';

/** An instant as it is printed: date, time of day to the second, decimals in threes from the point on, and the scale. */
export interface InstantParts {
  readonly date: string;
  readonly clock: string;
  /** Milliseconds, microseconds, nanoseconds, as far as they are asked for. */
  readonly groups: readonly string[];
  readonly scale: Scale;
}

/**
 * Takes an instant apart for printing; what lies beyond the decimals is cut off, never rounded up.
 *
 * @param instant in TAI
 * @param scale in which it is printed; UTC before 1972 is printed in TAI, as UTC is not defined there
 * @param decimals 0 to 12
 */
export function instantParts(instant: Instant, scale: Scale, decimals: number): InstantParts {
  const text = timeText(instant, scale, LEAP_SECONDS, decimals);
  if (!text.ok) return instantParts(instant, 'TAI', decimals);
  const [date = '', time = ''] = text.value.split('T');
  const [clock = '', fraction = ''] = time.split('.');
  return { date, clock, groups: fraction.match(/\d{1,3}/g) ?? [], scale };
}

/** The same as one text with its scale, as it stands in a sentence or is copied. */
export function instantText(instant: Instant, scale: Scale, decimals: number): string {
  const { date, clock, groups, scale: printed } = instantParts(instant, scale, decimals);
  return `${date} ${clock}${groups.length > 0 ? `.${groups.join('')}` : ''} ${printed}`;
}
