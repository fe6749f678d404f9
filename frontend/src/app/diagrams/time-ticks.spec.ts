import { describe, expect, it } from 'vitest';
import { serverInstant } from '../instants/server-instant';
import { oneScale } from './one-scale';
import { timeTicks } from './time-ticks';

const BOX = { left: 0, top: 0, width: 400, height: 600 };
const origin = { taiS: serverInstant('2026-03-01T12:00:07.000Z').taiS, ps: 318_000_472_000 };
const texts = (topMs: number, pxPerMs: number, scale: 'UTC' | 'TAI' | 'TT' = 'UTC') => {
  const { y } = oneScale({ leftMs: 0, topMs, pxPerMs }, BOX);
  const { ticks, title } = timeTicks(y, origin, scale);
  return { texts: ticks.map(({ text }) => text), title, at: ticks.map(({ at }) => at) };
};

describe('the ticks of a time axis', () => {
  it('stand at whole milliseconds of the printed scale', () => {
    const { texts: printed, title, at } = texts(38, 10);
    expect(printed).toEqual(['.300', '.310', '.320', '.330', '.340', '.350']);
    expect(title).toBe('UTC, seconds within 12:00:07');
    expect(at[2]).toBeCloseTo(380 - 10 * 1.999528, 3); // .320 is 1.999528 ms after the origin at .318000472
  });

  it('are of the scale that is chosen: TT is 32.184 s ahead of TAI, and TAI 37 s of UTC', () => {
    expect(texts(38, 10, 'TT').title).toBe('TT, seconds within 12:01:16');
    expect(texts(38, 10, 'TT').texts).toContain('.500'); // .318 + .184 = .502
  });

  it('say their second where it is not the origin\u2019s', () => {
    expect(texts(720, 1).texts.slice(-2)).toEqual(['.900', '08.000']);
  });

  it('are times of day where they are whole seconds', () => {
    const { texts: printed, title } = texts(0, 0.02);
    expect(printed).toContain('12:00:05');
    expect(title).toBe('UTC, 2026-03-01');
    const late = { taiS: origin.taiS, ps: 999_600_000_000 };
    const { y } = oneScale({ leftMs: 0, topMs: 0, pxPerMs: 0.02 }, BOX);
    expect(timeTicks(y, late, 'UTC').ticks.map(({ text }) => text)).toContain('12:00:05');
  });
});
