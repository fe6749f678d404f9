import { describe, expect, it } from 'vitest';
import { C_M_S } from '../constants';
import { emptyEvents } from '../relativity/events';
import { coincidenceKernel, type CoincidenceKernel, RowList } from './kernel';
import { type CoincidenceRule } from './rule';
import { windowBounds } from './window-bounds';

const LIGHT_NS_M = C_M_S / 1e9;

interface Trigger {
  readonly site: number;
  /** From the base instant; may be negative. */
  readonly atNs: number;
  readonly sigmaNs?: number;
  readonly xM?: number;
}

interface Network {
  readonly window: CoincidenceRule['window'];
  readonly siteXM: readonly number[];
  readonly speedMS?: number;
  readonly positionSigmaM?: number;
  /** Gamma-beta along x of the window's frame at each trigger. */
  readonly frame?: readonly number[];
}

const BASE_S = 1_000_000;

/** The kernel over triggers in order of time, at sites on the x axis. */
function kernelOf({ window, siteXM, speedMS = 0, positionSigmaM = 0, frame }: Network, triggers: readonly Trigger[]): CoincidenceKernel {
  const events = { ...emptyEvents(Math.max(1, triggers.length)), count: triggers.length };
  triggers.forEach(({ site, atNs, sigmaNs = 0, xM }, row) => {
    events.taiS[row] = BASE_S + Math.floor(atNs / 1e9);
    events.ps[row] = Math.round((atNs - Math.floor(atNs / 1e9) * 1e9) * 1e3);
    events.site[row] = site;
    events.xM[row] = xM ?? siteXM[site]!;
    events.sigmaNs[row] = sigmaNs;
    events.readingSigmaNs[row] = sigmaNs;
  });
  const lines = siteXM.map((x) => ({ x, placeAt: () => [x, 0, 0] as const, mostSpeedMS: speedMS, mostRadiusM: Math.abs(x) + 1e9 }));
  const apart = (a: number, b: number) => Math.abs(siteXM[a]! - siteXM[b]!);
  return coincidenceKernel({
    events,
    errors: {
      siteDelaySigmaNs: new Float64Array(siteXM.length),
      sitePositionSigmaM: new Float64Array(siteXM.length).fill(positionSigmaM),
      segmentOffsetSigmaNs: new Float64Array(0),
      segmentRateSigmaNsPerDay: new Float64Array(0),
      segmentCovarianceNs2PerDay: new Float64Array(0),
      segmentReference: new Int32Array(0),
      referenceSigmaNs: new Float64Array(0),
    },
    rule: { code: 'rule', minimumFold: 2, sigmas: 3, window },
    bounds: windowBounds(window, lines, (a, b) => {
      const m = apart(
        lines.findIndex((line) => line === a),
        lines.findIndex((line) => line === b),
      );
      return { leastM: m, mostM: m };
    }),
    windowVelocities: frame && Float64Array.from(frame.flatMap((u) => [Math.sqrt(1 + u * u), u, 0, 0])),
  });
}

function laterOf(kernel: CoincidenceKernel, event: number): number[] {
  const found = new RowList();
  return Array.from(found.rows.subarray(0, kernel.laterNear(event, found)));
}
function earlierOf(kernel: CoincidenceKernel, event: number): number[] {
  const found = new RowList();
  return Array.from(found.rows.subarray(0, kernel.earlierNear(event, found)));
}

/** Are two triggers of sites 0 and 1 near, by every way of asking? */
function isNear(network: Network, first: Omit<Trigger, 'site'>, second: Omit<Trigger, 'site'>): boolean {
  const kernel = kernelOf(network, [
    { site: 0, ...first },
    { site: 1, ...second },
  ]);
  const answers = [kernel.near(0, 1), kernel.near(1, 0), laterOf(kernel, 0).includes(1), earlierOf(kernel, 1).includes(0)];
  expect(new Set(answers).size).toBe(1);
  return answers[0]!;
}

const fixed = (widthNs: number): Network => ({ window: { kind: 'fixed', widthNs, frame: 'geocentric' }, siteXM: [0, 10, 20] });
const light = (more: Partial<Network> = {}): Network => ({
  window: { kind: 'light-time', speedC: 1, marginNs: 0 },
  siteXM: [0, 100 * LIGHT_NS_M],
  ...more,
});

describe('the kernel', () => {
  it('finds nothing around a single trigger, and takes none at all', () => {
    const kernel = kernelOf(fixed(10), [{ site: 0, atNs: 5 }]);
    expect([laterOf(kernel, 0), earlierOf(kernel, 0)]).toEqual([[], []]);
    expect(() => kernelOf(fixed(10), [])).not.toThrow();
    expect(() => kernelOf(light(), [])).not.toThrow();
  });

  it('never has two triggers of one site near, even at one instant', () => {
    const kernel = kernelOf(fixed(10), [
      { site: 0, atNs: 5 },
      { site: 0, atNs: 5 },
      { site: 1, atNs: 5 },
    ]);
    expect(kernel.near(0, 1)).toBe(false);
    expect(laterOf(kernel, 0)).toEqual([2]);
    expect(laterOf(kernel, 1)).toEqual([2]);
    expect(earlierOf(kernel, 2)).toEqual([0, 1]);
  });

  it('includes the last picosecond of a fixed window and not the next, across a second as well', () => {
    expect(isNear(fixed(10), { atNs: 0 }, { atNs: 10 })).toBe(true);
    expect(isNear(fixed(10), { atNs: 0 }, { atNs: 10.001 })).toBe(false);
    expect(isNear(fixed(10), { atNs: -4 }, { atNs: 6 })).toBe(true);
    expect(isNear(fixed(10), { atNs: -4 }, { atNs: 6.001 })).toBe(false);
    expect(isNear(fixed(0), { atNs: 3 }, { atNs: 3 })).toBe(true);
    expect(isNear(fixed(0), { atNs: 3 }, { atNs: 3.001 })).toBe(false);
  });

  it('ends a fixed window at a width that is no whole number of nanoseconds, across a second as within it', () => {
    const kernel = (widthNs: number, firstPs: number) =>
      kernelOf(fixed(widthNs), [
        { site: 0, atNs: -firstPs / 1e3 },
        { site: 1, atNs: (Math.round(widthNs * 1e3) - firstPs) / 1e3 },
      ]);
    for (const widthNs of [0.001, 0.3, 0.7, 1.001, 12_345_678.9, 70_000_000.007]) {
      for (const firstPs of [0, 1, 100, 299]) {
        const asked = kernel(widthNs, firstPs);
        expect([widthNs, firstPs, asked.near(0, 1), laterOf(asked, 0), earlierOf(asked, 1)]).toEqual([widthNs, firstPs, true, [1], [0]]);
      }
    }
  });

  it('gives rows in ascending order, before and after', () => {
    const kernel = kernelOf(
      fixed(10),
      [1, 2, 0, 1, 2].map((site, k) => ({ site, atNs: k })),
    );
    expect(earlierOf(kernel, 2)).toEqual([0, 1]);
    expect(laterOf(kernel, 2)).toEqual([3, 4]);
    expect(earlierOf(kernel, 4)).toEqual([0, 2, 3]);
  });
});

describe('a light-time window', () => {
  it('ends at distance over c, plus the margin', () => {
    expect(isNear(light(), { atNs: 0 }, { atNs: 99.999 })).toBe(true);
    expect(isNear(light(), { atNs: 0 }, { atNs: 100.001 })).toBe(false);
    const margin = light({ window: { kind: 'light-time', speedC: 0.5, marginNs: 7 } });
    expect(isNear(margin, { atNs: 0 }, { atNs: 206.999 })).toBe(true);
    expect(isNear(margin, { atNs: 0 }, { atNs: 207.001 })).toBe(false);
  });

  it('is widened by so many standard errors of the gap, both events equally sure', () => {
    // 3 sqrt(30^2 + 40^2) = 150; the reach of each alone, 90 and 120, would leave the end of the window out.
    expect(isNear(light(), { atNs: 0, sigmaNs: 30 }, { atNs: 249.999, sigmaNs: 40 })).toBe(true);
    expect(isNear(light(), { atNs: 0, sigmaNs: 30 }, { atNs: 250.001, sigmaNs: 40 })).toBe(false);
    // 3 sqrt(60^2 + 60^2) = 254.558
    expect(isNear(light(), { atNs: 0, sigmaNs: 60 }, { atNs: 354.557, sigmaNs: 60 })).toBe(true);
    expect(isNear(light(), { atNs: 0, sigmaNs: 60 }, { atNs: 354.559, sigmaNs: 60 })).toBe(false);
  });

  it('is widened by the errors of the positions', () => {
    const unsure = light({ positionSigmaM: 40 * LIGHT_NS_M });
    // 3 sqrt(40^2 + 40^2) = 169.706
    expect(isNear(unsure, { atNs: 0 }, { atNs: 269.705 })).toBe(true);
    expect(isNear(unsure, { atNs: 0 }, { atNs: 269.707 })).toBe(false);
  });

  it('takes each place at its own event, so that a fleet outruns its window', () => {
    const speedMS = 0.25 * C_M_S;
    const fleet = light({ speedMS });
    const moved = (atNs: number, sigmaNs = 0) => ({ atNs, sigmaNs, xM: (100 + 0.25 * atNs) * LIGHT_NS_M });
    // dt = 100 + dt / 4, and with a reach of 300: dt = 100 + dt / 4 + 300.
    expect(isNear(fleet, { atNs: 0 }, moved(133.333))).toBe(true);
    expect(isNear(fleet, { atNs: 0 }, moved(133.334))).toBe(false);
    expect(isNear(fleet, { atNs: 0 }, moved(533.333, 100))).toBe(true);
    expect(isNear(fleet, { atNs: 0 }, moved(533.334, 100))).toBe(false);
  });
});

describe('reach bands', () => {
  // One clock is good to a second, the others to a nanosecond.
  const triggers = [
    { site: 1, atNs: -2.9e9 },
    { site: 0, atNs: 0, sigmaNs: 1e9 },
    { site: 0, atNs: 1e8 },
    { site: 1, atNs: 1e8 + 50, sigmaNs: 1 },
    { site: 1, atNs: 2.9e9 },
    { site: 1, atNs: 3.1e9 },
  ];

  it('let the doubtful event reach far, and no other', () => {
    const kernel = kernelOf(light(), triggers);
    expect(laterOf(kernel, 1)).toEqual([3, 4]);
    expect(earlierOf(kernel, 1)).toEqual([0]);
    expect(laterOf(kernel, 2)).toEqual([3]);
    expect(earlierOf(kernel, 3)).toEqual([1, 2]);
    expect(earlierOf(kernel, 4)).toEqual([1]);
    expect(earlierOf(kernel, 5)).toEqual([]);
  });

  it('stretch the reach of a fleet as well', () => {
    const kernel = kernelOf(light({ speedMS: 0.25 * C_M_S }), [
      { site: 0, atNs: 0, sigmaNs: 1e6 },
      { site: 1, atNs: 3.9e6, xM: (100 + 0.25 * 3.9e6) * LIGHT_NS_M },
      { site: 1, atNs: 4.1e6, xM: (100 + 0.25 * 4.1e6) * LIGHT_NS_M },
    ]);
    expect(laterOf(kernel, 0)).toEqual([1]);
    expect([kernel.near(0, 1), kernel.near(2, 0)]).toEqual([true, false]);
  });
});

describe('a fixed window in a moving frame', () => {
  const moving = (frame: readonly number[]): Network => ({
    window: { kind: 'fixed', widthNs: 10, frame: 'fleet' },
    siteXM: [0, 100 * LIGHT_NS_M],
    frame,
  });

  it('takes the time between the events in that frame: gamma dt less gamma beta dx over c', () => {
    // gamma beta 0.75, gamma 1.25: 1.25 dt - 75 lies within 10 for dt from 52 to 68.
    for (const [atNs, near] of [
      [51.99, false],
      [52.01, true],
      [67.99, true],
      [68.01, false],
    ] as const) {
      expect(isNear(moving([0.75, 0.75]), { atNs: 0 }, { atNs })).toBe(near);
    }
  });

  it('takes the frame at the earlier event, whichever way it is asked', () => {
    expect(isNear(moving([0.75, 0]), { atNs: 0 }, { atNs: 60 })).toBe(true);
    expect(isNear(moving([0, 0.75]), { atNs: 0 }, { atNs: 60 })).toBe(false);
  });
});
