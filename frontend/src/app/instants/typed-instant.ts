import { type Instant } from '#shared/time/instant';
import { type Scale } from '#shared/time/scales';
import { instantParts } from './instant-parts';

const PICOSECOND_DIGITS = 12;

/** An instant as it is typed into a form, exact to the picosecond: `2027-03-01T00:00:00.5 TAI`. */
export function typedInstant(instant: Instant, scale: Scale): string {
  const { date, clock, groups, scale: printed } = instantParts(instant, scale, PICOSECOND_DIGITS);
  const decimals = groups.join('').replace(/0+$/, '');
  return `${date}T${clock}${decimals === '' ? '' : `.${decimals}`} ${printed}`;
}
