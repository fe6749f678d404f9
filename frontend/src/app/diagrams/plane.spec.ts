import { describe, expect, it } from 'vitest';
import { C_M_S } from '#shared/constants';
import { boostEvent } from '#shared/relativity/boost';
import { type EventColumns, emptyEvents } from '#shared/relativity/events';
import { fourVelocity } from '#shared/relativity/velocity';
import { M_PER_LIGHT_MS } from './light-ms';
import { alongDirection, aroundEvent, boostPlane, emptyPlane } from './plane';

const ROUNDING_MS = 1e-9; // a picosecond: differences below 1,000 s are good to it

/** Events of [seconds, picoseconds, x, y, z in light-ms]. */
function eventsAt(...rows: readonly (readonly [number, number, number, number, number])[]): EventColumns {
  const events = { ...emptyEvents(rows.length), count: rows.length };
  rows.forEach(([taiS, ps, x, y, z], i) => {
    events.taiS[i] = taiS;
    events.ps[i] = ps;
    events.xM[i] = x * M_PER_LIGHT_MS;
    events.yM[i] = y * M_PER_LIGHT_MS;
    events.zM[i] = z * M_PER_LIGHT_MS;
  });
  return events;
}

describe('events around one of them', () => {
  it('stand at their light-time and time from it, by the 3-4-5 triangle and across a second', () => {
    const plane = aroundEvent(eventsAt([99, 999_000_000_000, 1, 1, 1], [100, 1_000_000_000, 4, 5, 1]), 0);
    expect([...plane.xMs]).toEqual([0, expect.closeTo(5, 9)]);
    expect([...plane.tMs]).toEqual([0, 2]);
  });

  it('stand on the light line exactly where light joins them', () => {
    const plane = aroundEvent(eventsAt([0, 0, 0, 0, 0], [0, 7_000_000_000, 2, 3, 6]), 0); // 2^2 + 3^2 + 6^2 = 7^2
    expect(Math.abs((plane.tMs[1] ?? 0) - (plane.xMs[1] ?? 0))).toBeLessThan(ROUNDING_MS);
  });
});

describe('events along a direction', () => {
  it('stand at their signed distance along it', () => {
    const plane = alongDirection(eventsAt([0, 0, 1, 0, 0], [0, 0, -2, 9, 0], [0, 5_000_000_000, 4, 0, 3]), 0, [1, 0, 0]);
    [0, -3, 3].forEach((xMs, i) => expect(plane.xMs[i]).toBeCloseTo(xMs, 9));
    expect([...plane.tMs]).toEqual([0, 0, 5]);
  });

  it('are placed by a frame along it as the core places them, whatever they are off it', () => {
    const rows = [
      [0, 0, 0, 0, 0],
      [0, 13_200_000_000, 36, 0, 0],
      [0, 41_000_000_000, -17, 22, 5],
    ] as const;
    const rest = alongDirection(eventsAt(...rows), 0, [1, 0, 0]);
    const into = emptyPlane(rest.count);
    boostPlane(rest, { gamma: 1.25, gammaBeta: 0.75 }, into); // 0.6 c: the 3-4-5 triangle
    rows.forEach(([, ps, x, y, z], i) => {
      const event = { ctM: (ps / 1e12) * C_M_S, xM: [x, y, z].map((ms) => ms * M_PER_LIGHT_MS) as [number, number, number] };
      const { ctM, xM } = boostEvent(fourVelocity([0.75, 0, 0]), event);
      expect(into.tMs[i]).toBeCloseTo(ctM / M_PER_LIGHT_MS, 9);
      expect(into.xMs[i]).toBeCloseTo(xM[0] / M_PER_LIGHT_MS, 9);
    });
    expect(into.tMs[1]).toBeCloseTo(-10.5, 9); // by hand: 1.25 (13.2 - 0.6 x 36)
  });
});
