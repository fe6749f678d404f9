import { describe, expect, it } from 'vitest';
import { finalsExcerpt } from './finals-excerpt';
import { readFinalsFile } from './finals-file';
import { earthRotation } from './rotation';

const DAY_S = 86_400;
const FIRST_MJD = 61_000;
const TAI_MINUS_UTC_S = 37;
const startOf = (mjd: number): number => (mjd - 40_587) * DAY_S + TAI_MINUS_UTC_S;

/** A line of finals2000A with values of its own for each day; MJD 61000 is 2025-11-21. */
function line(at: number): string {
  const day = new Intl.DateTimeFormat('en-CA', { timeZone: 'UTC', dateStyle: 'short' }).format((FIRST_MJD + at - 40_587) * DAY_S * 1000);
  const [year, month, dayOfMonth] = day.split('-').map(Number);
  const text = `${String(year! - 2000).padStart(2)}${String(month).padStart(2)}${String(dayOfMonth).padStart(2)} ${FIRST_MJD + at}.00 I `;
  const pole = (0.1 + at / 1000).toFixed(6);
  return `${text} ${pole} 0.000091  ${pole} 0.000091  I ${(0.05 + (at % 7) / 1000).toFixed(7)} 0.0000101`;
}

const TEXT = `${Array.from({ length: 30 }, (_, at) => line(at)).join('\r\n')}\r\n`;

function tableOf(text: string) {
  const read = readFinalsFile(text, () => TAI_MINUS_UTC_S);
  if (!read.ok) throw new Error(`${read.problem.where}: ${read.problem.text}`);
  return read.value;
}

const placeAt = (text: string, taiS: number): readonly number[] => {
  const place = new Float64Array(3);
  earthRotation(tableOf(text)).placeInto(6378137, 1000, -2000, taiS, 5e11, place, 0);
  return [...place];
};

describe('finalsExcerpt', () => {
  const whole = tableOf(TEXT);

  it.each([
    ['within a day', [10.3], 2],
    ['at midnight', [10], 3],
    ['just after midnight', [10 + 100 / DAY_S], 3],
    ['over some days, in any order', [14.2, 10.7, 12], 6],
    ['before the file', [-400], 1],
    ['after the file', [400], 1],
    ['all over the file', [-5, 40], 30],
  ])('turns the Earth as the whole file does, to the bit: %s', (_, days, count) => {
    const instants = days.map((day) => ({ taiS: startOf(FIRST_MJD) + Math.round(day * DAY_S), ps: 0 }));
    const excerpt = finalsExcerpt(TEXT, whole, instants);
    expect(excerpt.trimEnd().split('\n')).toHaveLength(count);
    for (const { taiS } of instants) expect(placeAt(excerpt, taiS)).toEqual(placeAt(TEXT, taiS));
  });
});
