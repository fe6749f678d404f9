/**
 * True times of the example are whole picoseconds since 2016-12-31T00:00:00 UTC, which the leap second at the end of that day does not
 * interrupt.
 */
export type ElapsedPs = bigint;

export type LogScale = 'UTC' | 'TAI' | 'GPS' | 'TT';

const PS_PER_S = 10n ** 12n;
const PS_PER_MS = 10n ** 9n;
const MS_PER_DAY = 86_400_000;
const DAY_START_MS = Date.UTC(2016, 11, 31);
/** The leap second is the 86,401st of the day. */
const LEAP_SECOND_PS = 86_400n * PS_PER_S;

/** What the scale shows beyond UTC on 2016-12-31: TAI - UTC was 36 s, GPS = TAI - 19 s, TT = TAI + 32.184 s. */
const AHEAD_PS: Readonly<Record<Exclude<LogScale, 'UTC'>, bigint>> = {
  TAI: 36n * PS_PER_S,
  GPS: 17n * PS_PER_S,
  TT: 68_184n * PS_PER_MS,
};

/** Elapsed picoseconds of a UTC time of day on 2016-12-31, or of the day after with `day` 1. */
export function elapsed(timeOfDay: string, day: 0 | 1 = 0): ElapsedPs {
  const [hour = 0, minute = 0, second = 0] = timeOfDay.split(':').map(Number);
  const seconds = day * 86_401 + hour * 3600 + minute * 60;
  return BigInt(seconds) * PS_PER_S + BigInt(Math.round(second * 1e12));
}

/** Date and time of day on a scale, with so many decimals; the last one is rounded. */
export function textOn(scale: LogScale, at: ElapsedPs, decimals: number): string {
  const unit = 10n ** BigInt(12 - decimals);
  if (scale !== 'UTC') return civil(nearest(at + AHEAD_PS[scale], unit), decimals);
  const rounded = nearest(at, unit);
  if (rounded < LEAP_SECOND_PS) return civil(rounded, decimals);
  if (rounded >= LEAP_SECOND_PS + PS_PER_S) return civil(rounded - PS_PER_S, decimals);
  return civil(rounded - PS_PER_S, decimals).replace('T23:59:59', 'T23:59:60');
}

const nearest = (value: bigint, unit: bigint): bigint => ((value + unit / 2n) / unit) * unit;

function civil(ps: bigint, decimals: number): string {
  const seconds = ps / PS_PER_S;
  const days = Math.floor(Number(seconds) / 86_400);
  const date = new Date(DAY_START_MS + days * MS_PER_DAY + (Number(seconds) % 86_400) * 1000).toISOString().slice(0, 19);
  const fraction = (ps % PS_PER_S).toString().padStart(12, '0').slice(0, decimals);
  return decimals === 0 ? date : `${date}.${fraction}`;
}
