import { describe, expect, it } from 'vitest';
import { constantOrientation } from '../earth/earth-orientation';
import { earthRotation } from '../earth/rotation';
import { type Network } from '../reconcile/network';
import { compareInstants } from '../time/instant';
import { shippedLeapSeconds } from '../time/shipped-leap-seconds';
import { parseStatedTime } from '../time/stated-time';
import { buildNetwork, type NetworkGround } from './build-network';
import { type NetworkFile, parseNetworkFile } from './network-file';

const leapSeconds = shippedLeapSeconds();
const ground: NetworkGround = {
  leapSeconds,
  rotationFor: () => earthRotation(constantOrientation(-37)),
  earthBarycentricVelocityMS: () => [0, 29_800, 0],
};

const instant = (text: string) => {
  const time = parseStatedTime(text, '', leapSeconds);
  if (!time.ok) throw new Error(time.problem.text);
  return time.value.instant;
};

/** A file with one of each; what is given replaces whole fields of it. */
function fileWith(more: Partial<NetworkFile> = {}): NetworkFile {
  const file = parseNetworkFile({
    network: 'Two sites',
    run: { name: 'night', from: '2026-03-01T00:00:00Z', to: '2026-03-02T00:00:00Z' },
    references: [{ code: 'loran' }, { code: 'fountain', sigma_ns: 4 }],
    clocks: [
      {
        code: 'maser',
        segments: [
          {
            from: '2026-03-01T12:00:00Z',
            offset_ns: 5,
            offset_sigma_ns: 6,
            rate_ns_per_day: 7,
            rate_sigma_ns_per_day: 8,
            covariance_ns2_per_day: 9,
          },
          { from: '2026-03-01T00:00:00Z', at: '2026-03-01T06:00:00Z', offset_ns: 1, offset_sigma_ns: 2, reference: 'fountain' },
        ],
      },
    ],
    sites: [
      { code: 'VES', scale: 'GPS', clock: 'exact', position: { itrs_m: [3513638.2, 778956.5, 5248216.5] } },
      {
        code: 'ORL',
        name: 'Orlen Ridge',
        scale: 'UTC',
        clock: 'maser',
        position: { geodetic: { latitude_deg: 0, longitude_deg: 90 } },
        position_sigma_m: 0.05,
        delay_ns: 412.5,
        delay_sigma_ns: 1.5,
        reading_sigma_ns: 20,
      },
    ],
    frames: [
      { code: 'cmb', parent: 'bary', velocity: { speed_km_s: 369.82, toward: { ra_deg: 347.942, dec_deg: 6.944 } } },
      { code: 'bary', kind: 'barycentric' },
      { code: 'along', velocity: { rapidity: 0.7, toward: { baseline: ['ORL', 'VES'] } } },
    ],
    rule: { code: 'light2', window: { kind: 'light-time' } },
    selections: [{ code: 'claim-1', events: ['ORL:17', 'VES:5'] }],
    ...more,
  });
  if (!file.ok) throw new Error(`${file.problem.where}: ${file.problem.text}`);
  return file.value;
}

function networkWith(more?: Partial<NetworkFile>): Network {
  const network = buildNetwork(fileWith(more), ground);
  if (!network.ok) throw new Error(`${network.problem.where}: ${network.problem.text}`);
  return network.value;
}

function problemWith(more: Partial<NetworkFile>): string {
  const network = buildNetwork(fileWith(more), ground);
  return network.ok ? 'nothing' : `${network.problem.where}: ${network.problem.text}`;
}

describe('a network', () => {
  it('has its sites in the order of their codes, with the errors of each in its row', () => {
    const { sites, errors } = networkWith();
    expect(sites.map(({ code }) => code)).toEqual(['ORL', 'VES']);
    expect(Array.from(errors.siteDelaySigmaNs)).toEqual([1.5, 0]);
    expect(Array.from(errors.sitePositionSigmaM)).toEqual([0.05, 0]);
    expect(sites.map(({ readingSigmaNs }) => readingSigmaNs)).toEqual([20, undefined]);
  });

  it('sorts codes by code unit, digits as text', () => {
    const site = (code: string) => ({
      code,
      scale: 'TAI' as const,
      clock: 'exact',
      position: { itrs_m: [1, 2, 3] as [number, number, number] },
    });
    const codes = ['b', '10', 'B', '_', '9', '-', '__proto__'];
    const { sites } = networkWith({ sites: codes.map(site), frames: [] });
    expect(sites.map(({ code }) => code)).toEqual(['-', '10', '9', 'B', '_', '__proto__', 'b']);
  });

  it('places a geodetic site on WGS 84, and takes ITRS as it is', () => {
    const { sites } = networkWith();
    expect(sites[0]!.itrsM[1]).toBe(6378137); // NGA.STND.0036 (2014), semi-major axis
    expect(sites[1]!.itrsM).toEqual([3513638.2, 778956.5, 5248216.5]);
  });

  it('has the segments of a clock in the order of time, whatever order they stand in', () => {
    const { sites, errors } = networkWith();
    const clock = sites[0]!.clock;
    expect(clock.map(({ segment }) => segment.offsetNs)).toEqual([1, 5]);
    expect(clock[0]!.segment.at).toEqual(instant('2026-03-01T06:00:00Z'));
    expect(clock[1]!.segment.at).toEqual(instant('2026-03-01T12:00:00Z')); // as `from`, when none is given
    expect(sites.map(({ firstSegmentRow }) => firstSegmentRow)).toEqual([0, -1]);
    expect(Array.from(errors.segmentOffsetSigmaNs)).toEqual([2, 6]);
    expect(Array.from(errors.segmentRateSigmaNsPerDay)).toEqual([0, 8]);
    expect(Array.from(errors.segmentCovarianceNs2PerDay)).toEqual([0, 9]);
    expect(Array.from(errors.segmentReference)).toEqual([1, -1]);
    expect(Array.from(errors.referenceSigmaNs)).toEqual([0, 4]);
  });

  it('lets sites share one clock', () => {
    const { sites } = networkWith({ sites: fileWith().sites.map((site) => ({ ...site, clock: 'maser' })) });
    expect(sites.map(({ firstSegmentRow }) => firstSegmentRow)).toEqual([0, 0]);
  });

  it('has the frames in the order of the file, the geocentric first', () => {
    expect(networkWith().frames.codes).toEqual(['geocentric', 'cmb', 'bary', 'along']);
  });

  it('lets a parent come after its child', () => {
    // By hand: 369.82 km/s in (359.0, -76.7, 44.7), and 29.8 km/s against the second axis for the barycentre, are 377.1 km/s; both are small
    // enough against c to add as they are.
    const velocity = networkWith().frames.velocityAt('cmb', instant('2026-03-01T00:00:00Z'));
    const speedC = velocity.ok ? Math.hypot(...velocity.value.gammaBeta) : NaN;
    expect(speedC * 299792.458).toBeCloseTo(377.1, 1);
  });

  it('has the defaults of what is left out', () => {
    const { rule, to, origin, from, runName, neighboursWithinNs, selections, frames } = networkWith({
      run: { from: '2026-03-01T00:00:00Z' },
      selections: undefined,
      frames: undefined,
    });
    expect(rule).toEqual({ code: 'light2', minimumFold: 2, sigmas: 3, window: { kind: 'light-time', speedC: 1, marginNs: 0 } });
    expect(to).toBeUndefined();
    expect(origin).toEqual(from);
    expect([runName, neighboursWithinNs, selections]).toEqual(['', undefined, []]);
    expect(frames.codes).toEqual(['geocentric']);
    const { window } = networkWith({ rule: { code: 'f', window: { kind: 'fixed', width_ns: 5 } } }).rule;
    expect(window).toEqual({ kind: 'fixed', widthNs: 5, frame: 'geocentric' });
  });

  it('reads times on the scale that they say', () => {
    const { from, to, origin } = networkWith({
      run: { from: '2026-03-01T00:00:00 TAI', to: '2026-03-01T00:00:00' },
      origin: { time: '2026-03-01T00:00:00 GPS' },
    });
    expect([from, origin, to].map(({ taiS } = { taiS: NaN, ps: 0 }) => taiS - from.taiS)).toEqual([0, 19, 37]); // TAI - GPS 19 s (IS-GPS-200), TAI - UTC 37 s
    expect(compareInstants(from, origin)).toBeLessThan(0);
  });

  it('may end in the instant in which it begins', () => {
    expect(problemWith({ run: { from: '2026-03-01T00:00:00Z', to: '2026-03-01T00:00:37 TAI' } })).toBe('nothing');
  });

  it('warns of UTC beyond the end of the leap-second list', () => {
    const network = buildNetwork(fileWith({ run: { from: '2026-03-01T00:00:00Z', to: '2099-01-01T00:00:00Z' } }), ground);
    expect(network.ok && network.warnings.map(({ where }) => where)).toEqual(['run.to']);
    const clear = buildNetwork(fileWith({ run: { from: '2026-03-01T00:00:00Z', to: '2099-01-01T00:00:00 TAI' } }), ground);
    expect(clear.ok && clear.warnings).toEqual([]);
  });
});

describe('a network whose parts do not fit is refused', () => {
  const base = fileWith();
  const [ves, orl] = base.sites;
  const clock = base.clocks![0]!;
  const [later, earlier] = clock.segments;
  const frames = base.frames!;
  const inSegment = (more: object) => ({ clocks: [{ ...clock, segments: [{ ...earlier!, ...more }] }] });
  const light = (toward: object, more: object = {}) => ({ frames: [{ code: 'f', velocity: { speed_c: 0.5, toward }, ...more }] });
  const run = (from: string, to?: string) => ({ run: { from, to } });
  const LEAP =
    'there is no leap second there; second 60 exists only as 23:59:60 at the end of a day for which the leap-second list has one';
  const FORM =
    'is not of the form YYYY-MM-DDTHH:MM:SS with up to 12 decimals, then Z, or a blank and one of UTC, TAI, GPS, TT, or nothing (UTC)';

  it.each<[string, Partial<NetworkFile>, string]>([
    [
      'a reference twice',
      { references: [{ code: 'a' }, { code: 'a' }] },
      'references[1].code: is "a" for the second time; it must be a code of its own',
    ],
    ['a clock twice', { clocks: [clock, clock] }, 'clocks[1].code: is "maser" for the second time; it must be a code of its own'],
    ['a site twice', { sites: [ves!, orl!, ves!] }, 'sites[2].code: is "VES" for the second time; it must be a code of its own'],
    [
      'a selection twice',
      {
        selections: [
          { code: 's', events: [] },
          { code: 's', events: [] },
        ],
      },
      'selections[1].code: is "s" for the second time; it must be a code of its own',
    ],
    [
      'an event twice in a selection',
      { selections: [{ code: 's', events: ['A:1', 'A:2', 'A:1'] }] },
      'selections[0].events[2]: is "A:1" for the second time; it must be an event that the selection does not name yet',
    ],
    ['an unknown clock', { sites: [{ ...orl!, clock: 'mazer' }] }, 'sites[0].clock: is "mazer"; it must be one of "exact", "maser"'],
    [
      'a clock by a name that objects have',
      { sites: [{ ...orl!, clock: 'constructor' }] },
      'sites[0].clock: is "constructor"; it must be one of "exact", "maser"',
    ],
    [
      'a clock called exact',
      { clocks: [{ ...clock, code: 'exact' }] },
      'clocks[0].code: is "exact"; that word means a clock without error and cannot name another',
    ],
    [
      'an unknown reference',
      inSegment({ reference: 'fontain' }),
      'clocks[0].segments[0].reference: is "fontain"; it must be one of "loran", "fountain"',
    ],
    [
      'a reference where none is listed',
      { ...inSegment({ reference: 'fountain' }), references: undefined },
      'clocks[0].segments[0].reference: is "fountain"; it must be left out, since no references are listed',
    ],
    [
      'two segments that begin together, on whatever scales',
      { clocks: [{ ...clock, segments: [earlier!, { ...later!, from: '2026-03-01T00:00:18 GPS' }] }] },
      'clocks[0].segments[1].from: is the same instant as clocks[0].segments[0].from; each segment must begin at an instant of its own',
    ],
    [
      'a run that ends before it begins',
      run('2026-03-01T00:00:00Z', '2026-02-28T23:59:59.999999999999Z'),
      'run.to: is "2026-02-28T23:59:59.999999999999Z"; it must be a time not before run.from (2026-03-01T00:00:00Z)',
    ],
    [
      'and on two scales',
      run('2026-03-01T00:00:00Z', '2026-03-01T00:00:36 TAI'),
      'run.to: is "2026-03-01T00:00:36 TAI"; it must be a time not before run.from (2026-03-01T00:00:00Z)',
    ],
    [
      'a date that does not exist',
      run('2026-02-30T00:00:00Z'),
      'run.from: "2026-02-30T00:00:00Z": the date does not exist; months are 01 to 12, days 01 to the last of the month',
    ],
    [
      'hour 24',
      run('2026-03-01T24:00:00Z'),
      'run.from: "2026-03-01T24:00:00Z": the time of day does not exist; hours are 00 to 23, minutes and seconds 00 to 59, and a day may end one second early in UTC only',
    ],
    ['a leap second where none is', run('2026-03-01T23:59:60Z'), `run.from: "2026-03-01T23:59:60Z": ${LEAP}`],
    [
      'second 60 in TAI',
      { origin: { time: '2016-12-31T23:59:60 TAI' } },
      'origin.time: "2016-12-31T23:59:60 TAI": second 60 does not exist on the TAI scale; leap seconds belong to UTC',
    ],
    [
      'UTC before 1972',
      run('1971-12-31T23:59:59Z'),
      'run.from: "1971-12-31T23:59:59Z": UTC before 1972-01-01T00:00:00 had seconds of another length and is not converted; use TAI',
    ],
    [
      'an empty time',
      run(''),
      'run.from: is empty; it must be YYYY-MM-DDTHH:MM:SS with up to 12 decimals, then Z, or a blank and one of UTC, TAI, GPS, TT, or nothing (UTC)',
    ],
    ['another scale', run('2026-03-01T00:00:00 TDB'), `run.from: "2026-03-01T00:00:00 TDB" ${FORM}`],
    ['a time zone', run('2026-03-01T00:00:00+01:00'), `run.from: "2026-03-01T00:00:00+01:00" ${FORM}`],
    ['13 decimals', run('2026-03-01T00:00:00.1234567890123Z'), `run.from: "2026-03-01T00:00:00.1234567890123Z" ${FORM}`],
    ['two scales', run('2026-03-01T00:00:00Z TAI'), `run.from: "2026-03-01T00:00:00Z TAI" ${FORM}`],
    ['a date alone', run('2026-03-01'), `run.from: "2026-03-01" ${FORM}`],
    ['a wrong end of the run', run('2026-03-01T00:00:00Z', 'later'), `run.to: "later" ${FORM}`],
    ['a wrong time of a segment', inSegment({ from: 'noon' }), `clocks[0].segments[0].from: "noon" ${FORM}`],
    ['a wrong epoch of a segment', inSegment({ at: 'noon' }), `clocks[0].segments[0].at: "noon" ${FORM}`],
    [
      'a speed of c',
      light({ ra_deg: 0, dec_deg: 0 }, { velocity: { speed_c: 1, toward: { ra_deg: 0, dec_deg: 0 } } }),
      'frames[0].velocity.speed_c: is a speed of 1 c; a finite speed below 1 is allowed',
    ],
    [
      'a speed of c in km/s',
      light({}, { velocity: { speed_km_s: 299792.458, toward: { ra_deg: 0, dec_deg: 0 } } }),
      'frames[0].velocity.speed_km_s: is a speed of 299792.458 km/s; a finite speed below 299792.458 km/s is allowed',
    ],
    [
      'a velocity beyond c',
      light({}, { velocity: { beta: [0.7, 0.7, 0.2] } }),
      'frames[0].velocity.beta: is a velocity of [0.7, 0.7, 0.2] c; three finite numbers with a speed below 1 are allowed',
    ],
    [
      'an unknown parent',
      light({ ra_deg: 0, dec_deg: 0 }, { parent: 'sun' }),
      'frames[0].parent: no frame sun; a parent is geocentric or one of the frames listed',
    ],
    [
      'parents in a circle',
      {
        frames: [
          { ...frames[0]!, parent: 'g' },
          { ...frames[0]!, code: 'g', parent: 'cmb' },
        ],
      },
      'frames[0].parent: the parents cmb > g > cmb go round in a circle; a chain of parents must end at geocentric',
    ],
    [
      'a frame twice',
      { frames: [frames[1]!, frames[1]!] },
      'frames[1].code: the frame bary is defined twice; each frame needs a code of its own',
    ],
    [
      'the geocentric frame again',
      { frames: [{ ...frames[1]!, code: 'geocentric' }] },
      'frames[0].code: the frame geocentric always exists and cannot be defined; each frame needs a code of its own',
    ],
    [
      'a baseline to no site',
      light({ baseline: ['ORL', 'XXX'] }),
      'frames[0].velocity.toward.baseline[1]: no site XXX; a baseline joins two of the sites',
    ],
    [
      'a baseline to itself',
      light({ baseline: ['ORL', 'ORL'] }),
      'frames[0].velocity.toward.baseline[1]: the site ORL at both ends; a baseline joins two different sites',
    ],
    [
      'an unknown frame of the window',
      { rule: { code: 'r', window: { kind: 'fixed', width_ns: 5, frame: 'sun' } } },
      'rule.window.frame: is "sun"; it must be one of "geocentric", "cmb", "bary", "along"',
    ],
  ])('for %s', (_what, more, message) => {
    expect(problemWith(more)).toBe(message);
  });
});
