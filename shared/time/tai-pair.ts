import { MAX_DECIMALS } from './format';
import { PS_PER_S } from './instant';
import { type Reading } from './reading';

const PAIR = /^(-?\d{1,12}) (\d{1,12})$/;
/** The years 0000 to 9999, as a reading in ISO 8601 has them. */
const LEAST_TAI_S = -62_167_219_200;
const MOST_TAI_S = 253_402_300_799;

/** What a reading as a pair is, in words. */
export const TAI_PAIR_RIGHT =
  'two whole numbers with a blank between them, TAI seconds since 1970-01-01T00:00:00 TAI (years 0000 to 9999) and picoseconds below 10^12, such as 1772323237 123000000000';

/**
 * Reads a reading that is written as `SECONDS PICOSECONDS` of TAI.
 *
 * @param text as the site wrote it
 * @returns the reading, its resolution a picosecond; or why it is none
 */
export function readTaiPair(text: string): Reading | 'reading-empty' | 'reading-form' {
  if (text === '') return 'reading-empty';
  const [, seconds = '', picoseconds = ''] = PAIR.exec(text) ?? [];
  const taiS = Number(seconds);
  if (picoseconds === '' || !(taiS >= LEAST_TAI_S && taiS <= MOST_TAI_S)) return 'reading-form';
  const ps = Number(picoseconds);
  return ps < PS_PER_S ? { taiS: taiS + 0, ps, decimals: MAX_DECIMALS } : 'reading-form';
}
