/** A true minus, which is as wide as a plus. */
export const MINUS = '\u2212';
const THIN = '\u202f';
const GAP = '\u00a0';
const MARGIN_DIGITS = 3; // of a margin of thousands, whose error is known to no more

/** A figure and its unit, which no line parts: 0.41 ms. */
export const withUnit = (figure: string, unit: string): string => `${figure}${GAP}${unit}`;

/** A number with its sign, of so many decimals: +14.207, −2.410. */
export const signed = (value: number, decimals: number): string => `${value < 0 ? MINUS : '+'}${grouped(Math.abs(value), decimals)}`;

/** A number with a true minus where it is negative. */
export const plain = (value: number, decimals: number): string => `${value < 0 ? MINUS : ''}${grouped(Math.abs(value), decimals)}`;

/** Whole digits in threes by thin gaps. */
function grouped(value: number, decimals: number): string {
  const [whole = '', fraction] = value.toFixed(decimals).split('.');
  const spaced = whole.length > 4 ? whole.replace(/\B(?=(\d{3})+$)/g, THIN) : whole;
  return fraction === undefined ? spaced : `${spaced}.${fraction}`;
}

/** A margin in standard errors: one decimal below 1,000, above that three significant digits. */
export const margin = (sigma: number | string): string => {
  const value = Number(sigma);
  const isLarge = Math.abs(value) >= 1_000;
  return wholeMargin(isLarge && Number.isFinite(value) ? Number(value.toPrecision(MARGIN_DIGITS)) : value);
};

/** A margin in standard errors with every whole digit, as a title beside the short one says it. */
export const wholeMargin = (sigma: number | string): string => {
  const value = Number(sigma);
  const text = Number.isFinite(value) ? signed(value, Math.abs(value) < 1_000 ? 1 : 0) : `${value < 0 ? MINUS : '+'}\u221e`;
  return withUnit(text, '\u03c3');
};

/** A length of time in the unit that fits: 0.41 ms, 144 ns. */
export function timeText(ns: number): string {
  const size = Math.abs(ns);
  if (size >= 1e9) return withUnit(plain(ns / 1e9, 3), 's');
  if (size >= 1e6) return withUnit(plain(ns / 1e6, 3), 'ms');
  if (size >= 1e3) return withUnit(plain(ns / 1e3, 2), '\u00b5s');
  return withUnit(plain(ns, size >= 100 ? 0 : 1), 'ns');
}

/** How long ago, in the unit that fits. */
export function ageText(s: number): string {
  if (s < 60) return withUnit(Math.max(0, s).toFixed(1), 's');
  if (s < 3_600) return withUnit(String(Math.floor(s / 60)), 'min');
  return s < 86_400 ? withUnit(String(Math.floor(s / 3_600)), 'h') : withUnit(String(Math.floor(s / 86_400)), 'days');
}
