/** A true minus, which is as wide as a plus. */
export const MINUS = '\u2212';
const THIN = '\u202f';

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

/** A margin in standard errors: one decimal below 1,000. */
export const margin = (sigma: number | string): string => {
  const value = Number(sigma);
  if (!Number.isFinite(value)) return value < 0 ? `${MINUS}\u221e` : '+\u221e';
  return signed(value, Math.abs(value) < 1_000 ? 1 : 0);
};

/** A length of time in the unit that fits: 0.41 ms, 144 ns. */
export function timeText(ns: number): string {
  const size = Math.abs(ns);
  if (size >= 1e9) return `${plain(ns / 1e9, 3)} s`;
  if (size >= 1e6) return `${plain(ns / 1e6, 3)} ms`;
  if (size >= 1e3) return `${plain(ns / 1e3, 2)} \u00b5s`;
  return `${plain(ns, size >= 100 ? 0 : 1)} ns`;
}

/** How long ago, in the unit that fits. */
export function ageText(s: number): string {
  if (s < 60) return `${Math.max(0, s).toFixed(1)} s`;
  if (s < 3_600) return `${Math.floor(s / 60)} min`;
  return s < 86_400 ? `${Math.floor(s / 3_600)} h` : `${Math.floor(s / 86_400)} days`;
}
