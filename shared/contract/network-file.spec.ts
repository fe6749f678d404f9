import { describe, expect, it } from 'vitest';
import { type NetworkFile, parseNetworkFile } from './network-file';

type Path = readonly (string | number)[];

const SEGMENT: Path = ['clocks', 0, 'segments', 0];
const SITE: Path = ['sites', 0];
const GEODETIC: Path = [...SITE, 'position', 'geodetic'];
const ITRS: Path = ['sites', 1, 'position', 'itrs_m'];
const VELOCITY: Path = ['frames', 1, 'velocity'];
const WINDOW: Path = ['rule', 'window'];
const MISSING = Symbol('missing');

/** A file in which every field stands. */
const whole = (): NetworkFile => ({
  network: 'Three sites',
  run: { name: 'night', from: '2026-03-01T00:00:00Z', to: '2026-03-02T00:00:00Z' },
  origin: { time: '2026-03-01T12:00:00 TAI' },
  references: [{ code: 'fountain', sigma_ns: 4 }],
  clocks: [
    {
      code: 'maser',
      segments: [
        {
          from: '2026-03-01T00:00:00Z',
          at: '2026-03-01T06:00:00Z',
          offset_ns: 1830.2,
          offset_sigma_ns: 12,
          rate_ns_per_day: -35.1,
          rate_sigma_ns_per_day: 2.5,
          covariance_ns2_per_day: 30,
          reference: 'fountain',
        },
      ],
    },
  ],
  sites: [
    {
      code: 'ORL',
      name: 'Orlen Ridge',
      scale: 'UTC',
      clock: 'maser',
      position: { geodetic: { latitude_deg: 41.2, longitude_deg: -112.7, height_m: 1680 } },
      position_sigma_m: 0.05,
      delay_ns: 412.5,
      delay_sigma_ns: 1.5,
      reading_sigma_ns: 20,
    },
    { code: 'VES', scale: 'GPS', clock: 'exact', position: { itrs_m: [3513638.2, 778956.5, 5248216.5] } },
  ],
  frames: [
    { code: 'bary', name: 'Barycentre', kind: 'barycentric', at: 'origin' },
    { code: 'cmb', parent: 'bary', velocity: { speed_km_s: 369.82, toward: { ra_deg: 347.942, dec_deg: 6.944 } } },
    { code: 'probe', velocity: { beta: [0.1, 0, 0.02] } },
    { code: 'along', velocity: { rapidity: 0.7, toward: { baseline: ['ORL', 'VES'] } } },
  ],
  rule: { code: 'light2', minimum_fold: 2, sigmas: 3, window: { kind: 'light-time', speed_c: 1, margin_ns: 0 } },
  neighbours: { within_ns: 6e7 },
  selections: [{ code: 'claim-1', events: ['ORL:17', 'VES:5'] }],
});

/** The whole file with one value put in, or taken out. */
function changed(path: Path, value: unknown): unknown {
  const file = whole();
  const parent = path.slice(0, -1).reduce<object>((inside, part) => Reflect.get(inside, part) as object, file);
  if (value === MISSING) Reflect.deleteProperty(parent, path.at(-1) ?? '');
  else Reflect.set(parent, path.at(-1) ?? '', value);
  return file;
}

const problemOf = (input: unknown): string => {
  const parsed = parseNetworkFile(input);
  return parsed.ok ? 'nothing' : `${parsed.problem.where}: ${parsed.problem.text}`;
};

const NS = 'a number of nanoseconds';
const NS_POSITIVE = 'a number of nanoseconds, 0 or more';
const CODE = 'a code of 1 to 24 letters, digits, _ or -';
const TIME = 'a time such as 2026-03-01T00:00:00Z or 2026-03-01T00:00:00 TAI';
const COVARIANCE = 'at most offset_sigma_ns x rate_sigma_ns_per_day in size (30)';
const DIRECTION = 'either both "ra_deg" and "dec_deg", or "baseline"';
const ONE_SPEED = 'one of "beta", "speed_c", "speed_km_s", "rapidity"';
const SPEED_AND_TOWARD = '"beta" alone, or a speed with "toward"';
const BASELINE = 'a list of two site codes, from the first to the second';

describe('a network file', () => {
  it('may hold every field, and only those that are required', () => {
    expect(problemOf(whole())).toBe('nothing');
    expect(
      problemOf({
        network: '',
        run: { from: '2026-03-01T00:00:00Z' },
        sites: [{ code: 'A', scale: 'TT', clock: 'exact', position: { itrs_m: [0, 0, 0] } }],
        rule: { code: 'r', window: { kind: 'fixed', width_ns: 0 } },
      }),
    ).toBe('nothing');
  });

  it('is handed on as it is', () => {
    const parsed = parseNetworkFile(whole());
    expect(parsed.ok && parsed.value).toEqual(whole());
  });

  it.each<[string, Path, unknown]>([
    ['the poles', [...GEODETIC, 'latitude_deg'], -90],
    ['a longitude counted once round', [...GEODETIC, 'longitude_deg'], 359.9],
    ['a place below the ellipsoid', [...GEODETIC, 'height_m'], -430],
    ['errors of 0', [...SITE, 'reading_sigma_ns'], 0],
    ['a delay of 0 that is stated', [...SITE, 'delay_ns'], 0],
    ['a negative delay', [...SITE, 'delay_ns'], -4],
    ['a correlation of -1', [...SEGMENT, 'covariance_ns2_per_day'], -30],
    ['0 standard errors', ['rule', 'sigmas'], 0],
    ['a slow signal', [...WINDOW, 'speed_c'], 1e-6],
    ['a window wider than light', [...WINDOW, 'speed_c'], 2],
    ['a window that names its frame', WINDOW, { kind: 'fixed', width_ns: 1e5, frame: 'cmb' }],
    ['a code of 24 characters', ['sites', 1, 'code'], 'abcdefghijklmnopqrstu-_9'],
    ['codes that objects have as names', ['sites', 1, 'code'], '__proto__'],
    ['a frame that stands still', [...VELOCITY, 'speed_km_s'], 0],
    ['a reference without error', ['references', 0, 'sigma_ns'], MISSING],
    ['no sites', ['sites'], []],
    ['a selection of nothing', ['selections', 0, 'events'], []],
  ])('may have %s', (_what, path, value) => {
    expect(problemOf(changed(path, value))).toBe('nothing');
  });

  describe('with one mistake is refused by the field, its value and what would be right', () => {
    it.each<[Path, unknown, string, string]>([
      // what every field needs
      [['network'], MISSING, 'network: is missing', 'a text: the name of the network'],
      [['network'], 7, 'network: is 7', 'a text: the name of the network'],
      [['run'], MISSING, 'run: is missing', 'an object { }'],
      [['run'], '2026', 'run: is "2026"', 'an object { }'],
      [['run', 'from'], MISSING, 'run.from: is missing', TIME],
      [['run', 'from'], 1772323200, 'run.from: is 1772323200', TIME],
      [['run', 'to'], null, 'run.to: is null', TIME],
      [['run', 'name'], 3, 'run.name: is 3', 'a text'],
      [['origin'], 'TAI', 'origin: is "TAI"', 'an object { }'],
      [['origin', 'time'], 0, 'origin.time: is 0', TIME],
      [['sites'], MISSING, 'sites: is missing', 'a list of sites'],
      [['sites'], {}, 'sites: is {}', 'a list of sites'],
      [['rule'], MISSING, 'rule: is missing', 'an object { }'],
      // references
      [['references'], 'fountain', 'references: is "fountain"', 'a list of references'],
      [['references', 0], 'fountain', 'references[0]: is "fountain"', 'an object { }'],
      [['references', 0, 'code'], MISSING, 'references[0].code: is missing', CODE],
      [['references', 0, 'sigma_ns'], null, 'references[0].sigma_ns: is null', NS_POSITIVE],
      [['references', 0, 'sigma_ns'], -4, 'references[0].sigma_ns: is -4', NS_POSITIVE],
      // clocks
      [['clocks'], {}, 'clocks: is {}', 'a list of clocks'],
      [['clocks', 0, 'code'], '', 'clocks[0].code: is ""', CODE],
      [['clocks', 0, 'segments'], MISSING, 'clocks[0].segments: is missing', 'a list of clock segments'],
      [['clocks', 0, 'segments'], [], 'clocks[0].segments: is []', 'a list with at least one segment'],
      [[...SEGMENT, 'from'], MISSING, 'clocks[0].segments[0].from: is missing', TIME],
      [[...SEGMENT, 'at'], 6, 'clocks[0].segments[0].at: is 6', TIME],
      [[...SEGMENT, 'offset_ns'], MISSING, 'clocks[0].segments[0].offset_ns: is missing', NS],
      [[...SEGMENT, 'offset_ns'], Infinity, 'clocks[0].segments[0].offset_ns: is Infinity', NS],
      [[...SEGMENT, 'offset_sigma_ns'], MISSING, 'clocks[0].segments[0].offset_sigma_ns: is missing', NS_POSITIVE],
      [[...SEGMENT, 'offset_sigma_ns'], -12, 'clocks[0].segments[0].offset_sigma_ns: is -12', NS_POSITIVE],
      [[...SEGMENT, 'rate_ns_per_day'], '-35', 'clocks[0].segments[0].rate_ns_per_day: is "-35"', 'a number of nanoseconds a day'],
      [
        [...SEGMENT, 'rate_sigma_ns_per_day'],
        MISSING,
        'clocks[0].segments[0].rate_sigma_ns_per_day: is missing',
        'stated with rate_ns_per_day: nanoseconds a day, 0 or more',
      ],
      [
        [...SEGMENT, 'rate_sigma_ns_per_day'],
        -1,
        'clocks[0].segments[0].rate_sigma_ns_per_day: is -1',
        'a number of nanoseconds a day, 0 or more',
      ],
      [[...SEGMENT, 'covariance_ns2_per_day'], 30.1, 'clocks[0].segments[0].covariance_ns2_per_day: is 30.1', COVARIANCE],
      [[...SEGMENT, 'covariance_ns2_per_day'], -31, 'clocks[0].segments[0].covariance_ns2_per_day: is -31', COVARIANCE],
      [[...SEGMENT, 'covariance_ns2_per_day'], true, 'clocks[0].segments[0].covariance_ns2_per_day: is true', 'a number of ns^2 a day'],
      [[...SEGMENT, 'reference'], 'a fountain', 'clocks[0].segments[0].reference: is "a fountain"', CODE],
      // sites
      [[...SITE, 'code'], MISSING, 'sites[0].code: is missing', CODE],
      [[...SITE, 'code'], 'OR L', 'sites[0].code: is "OR L"', CODE],
      [[...SITE, 'code'], 'A'.repeat(25), `sites[0].code: is "${'A'.repeat(25)}"`, CODE],
      [[...SITE, 'code'], 'OR\u00c9', 'sites[0].code: is "OR\u00c9"', CODE],
      [[...SITE, 'code'], 'OR:L', 'sites[0].code: is "OR:L"', CODE],
      [[...SITE, 'code'], 'ORL\n', 'sites[0].code: is "ORL\\n"', CODE],
      [[...SITE, 'code'], 7, 'sites[0].code: is 7', CODE],
      [[...SITE, 'name'], ['Orlen'], 'sites[0].name: is ["Orlen"]', 'a text'],
      [[...SITE, 'scale'], MISSING, 'sites[0].scale: is missing', 'one of "UTC", "TAI", "GPS", "TT"'],
      [[...SITE, 'scale'], 'utc', 'sites[0].scale: is "utc"', 'one of "UTC", "TAI", "GPS", "TT"'],
      [[...SITE, 'scale'], 'TDB', 'sites[0].scale: is "TDB"', 'one of "UTC", "TAI", "GPS", "TT"'],
      [['sites', 1, 'clock'], MISSING, 'sites[1].clock: is missing', CODE],
      [[...SITE, 'position'], MISSING, 'sites[0].position: is missing', 'an object { }'],
      [[...SITE, 'position'], {}, 'sites[0].position: is {}', 'either "geodetic" or "itrs_m", and not both'],
      [
        ['sites', 1, 'position', 'geodetic'],
        { latitude_deg: 1, longitude_deg: 2 },
        'sites[1].position: is {"itrs_m":[3513638.2,778956.5,5248216.5],"geodetic":{"latitude_deg":1,"longitude...',
        'either "geodetic" or "itrs_m", and not both',
      ],
      [[...GEODETIC, 'latitude_deg'], '41.2', 'sites[0].position.geodetic.latitude_deg: is "41.2"', 'degrees from -90 to 90'],
      [[...GEODETIC, 'latitude_deg'], 90.0001, 'sites[0].position.geodetic.latitude_deg: is 90.0001', 'degrees from -90 to 90'],
      [[...GEODETIC, 'longitude_deg'], MISSING, 'sites[0].position.geodetic.longitude_deg: is missing', 'degrees from -360 to 360'],
      [[...GEODETIC, 'longitude_deg'], 361, 'sites[0].position.geodetic.longitude_deg: is 361', 'degrees from -360 to 360'],
      [[...GEODETIC, 'height_m'], '1.7 km', 'sites[0].position.geodetic.height_m: is "1.7 km"', 'metres above the ellipsoid'],
      [ITRS, [1, 2], 'sites[1].position.itrs_m: is [1,2]', 'a list of three numbers: Earth-fixed x, y, z in metres'],
      [ITRS, [1, 2, 3, 4], 'sites[1].position.itrs_m: is [1,2,3,4]', 'a list of three numbers: Earth-fixed x, y, z in metres'],
      [[...ITRS, 2], 'x', 'sites[1].position.itrs_m[2]: is "x"', 'a number of metres'],
      [[...ITRS, 0], null, 'sites[1].position.itrs_m[0]: is null', 'a number of metres'],
      [[...SITE, 'position_sigma_m'], -1, 'sites[0].position_sigma_m: is -1', 'a number of metres, 0 or more'],
      [[...SITE, 'delay_ns'], '412.5', 'sites[0].delay_ns: is "412.5"', NS],
      [[...SITE, 'delay_sigma_ns'], MISSING, 'sites[0].delay_sigma_ns: is missing', 'stated with delay_ns: nanoseconds, 0 or more'],
      [[...SITE, 'delay_sigma_ns'], -1e-9, 'sites[0].delay_sigma_ns: is -1e-9', NS_POSITIVE],
      [[...SITE, 'reading_sigma_ns'], -20, 'sites[0].reading_sigma_ns: is -20', NS_POSITIVE],
      // frames
      [['frames'], 'bary', 'frames: is "bary"', 'a list of frames'],
      [['frames', 0, 'code'], 'solar system', 'frames[0].code: is "solar system"', CODE],
      [['frames', 0, 'kind'], 'heliocentric', 'frames[0].kind: is "heliocentric"', 'one of "barycentric"'],
      [['frames', 0, 'at'], '2026-03-01T00:00:00Z', 'frames[0].at: is "2026-03-01T00:00:00Z"', 'one of "event", "origin"'],
      [
        ['frames', 0, 'velocity'],
        { beta: [0, 0, 0] },
        'frames[0]: is {"code":"bary","name":"Barycentre","kind":"barycentric","at":"origin","velocity"...',
        'with "velocity", or of "kind" "barycentric", and not both',
      ],
      [['frames', 2, 'velocity'], MISSING, 'frames[2]: is {"code":"probe"}', 'with "velocity", or of "kind" "barycentric", and not both'],
      [['frames', 1, 'parent'], 'the sun', 'frames[1].parent: is "the sun"', CODE],
      [['frames', 2, 'velocity', 'beta'], [0.7, 0.7], 'frames[2].velocity.beta: is [0.7,0.7]', 'a list of three numbers in c'],
      [['frames', 2, 'velocity', 'beta', 1], '0', 'frames[2].velocity.beta[1]: is "0"', 'a number in c'],
      [
        ['frames', 2, 'velocity', 'toward'],
        { ra_deg: 0, dec_deg: 0 },
        'frames[2].velocity: is {"beta":[0.1,0,0.02],"toward":{"ra_deg":0,"dec_deg":0}}',
        SPEED_AND_TOWARD,
      ],
      [VELOCITY, { speed_c: -0.5 }, 'frames[1].velocity.speed_c: is -0.5', 'a number of c, 0 or more'],
      [[...VELOCITY, 'speed_km_s'], -1, 'frames[1].velocity.speed_km_s: is -1', 'a number of km/s, 0 or more'],
      [['frames', 3, 'velocity', 'rapidity'], -0.7, 'frames[3].velocity.rapidity: is -0.7', 'a number of rapidity, 0 or more'],
      [[...VELOCITY, 'toward'], MISSING, 'frames[1].velocity: is {"speed_km_s":369.82}', SPEED_AND_TOWARD],
      [VELOCITY, {}, 'frames[1].velocity: is {}', ONE_SPEED],
      [VELOCITY, { speed_c: 0.1, rapidity: 0.1 }, 'frames[1].velocity: is {"speed_c":0.1,"rapidity":0.1}', ONE_SPEED],
      [[...VELOCITY, 'toward', 'dec_deg'], 91, 'frames[1].velocity.toward.dec_deg: is 91', 'degrees from -90 to 90'],
      [[...VELOCITY, 'toward', 'ra_deg'], -361, 'frames[1].velocity.toward.ra_deg: is -361', 'degrees from -360 to 360'],
      [[...VELOCITY, 'toward', 'dec_deg'], MISSING, 'frames[1].velocity.toward: is {"ra_deg":347.942}', DIRECTION],
      [[...VELOCITY, 'toward'], {}, 'frames[1].velocity.toward: is {}', DIRECTION],
      [
        [...VELOCITY, 'toward'],
        { ra_deg: 1, baseline: ['ORL', 'VES'] },
        'frames[1].velocity.toward: is {"ra_deg":1,"baseline":["ORL","VES"]}',
        DIRECTION,
      ],
      [
        ['frames', 3, 'velocity', 'toward', 'baseline'],
        ['ORL', 'VES', 'ORL'],
        'frames[3].velocity.toward.baseline: is ["ORL","VES","ORL"]',
        BASELINE,
      ],
      [['frames', 3, 'velocity', 'toward', 'baseline'], 'ORL', 'frames[3].velocity.toward.baseline: is "ORL"', BASELINE],
      // rule, neighbours, selections
      [['rule', 'code'], 'light 2', 'rule.code: is "light 2"', CODE],
      [['rule', 'minimum_fold'], 1, 'rule.minimum_fold: is 1', 'a whole number, at least 2'],
      [['rule', 'minimum_fold'], 2.5, 'rule.minimum_fold: is 2.5', 'a whole number, at least 2'],
      [['rule', 'sigmas'], -3, 'rule.sigmas: is -3', 'a number of standard errors, 0 or more'],
      [['rule', 'sigmas'], true, 'rule.sigmas: is true', 'a number of standard errors, 0 or more'],
      [WINDOW, MISSING, 'rule.window: is missing', 'an object { } with "kind" "light-time" or "fixed"'],
      [WINDOW, 'fixed', 'rule.window: is "fixed"', 'an object { } with "kind" "light-time" or "fixed"'],
      [WINDOW, {}, 'rule.window.kind: is missing', '"light-time" or "fixed"'],
      [[...WINDOW, 'kind'], 'light_time', 'rule.window.kind: is "light_time"', '"light-time" or "fixed"'],
      [[...WINDOW, 'speed_c'], 0, 'rule.window.speed_c: is 0', 'a speed in c above 0'],
      [[...WINDOW, 'speed_c'], -1, 'rule.window.speed_c: is -1', 'a speed in c above 0'],
      [[...WINDOW, 'margin_ns'], -5, 'rule.window.margin_ns: is -5', NS_POSITIVE],
      [WINDOW, { kind: 'fixed' }, 'rule.window.width_ns: is missing', NS_POSITIVE],
      [WINDOW, { kind: 'fixed', width_ns: -1 }, 'rule.window.width_ns: is -1', NS_POSITIVE],
      [WINDOW, { kind: 'fixed', width_ns: 1, frame: '' }, 'rule.window.frame: is ""', CODE],
      [['neighbours'], {}, 'neighbours.within_ns: is missing', NS_POSITIVE],
      [['neighbours', 'within_ns'], -1, 'neighbours.within_ns: is -1', NS_POSITIVE],
      [['selections', 0, 'code'], 'claim 1', 'selections[0].code: is "claim 1"', CODE],
      [['selections', 0, 'events'], MISSING, 'selections[0].events: is missing', 'a list of names of events'],
      [['selections', 0, 'events', 0], 17, 'selections[0].events[0]: is 17', 'the name of an event, such as ORL:17'],
    ])('%j as %j', (path, value, found, right) => {
      expect(problemOf(changed(path, value))).toBe(`${found}; it must be ${right}`);
    });

    it.each<[Path, string]>([
      [['colour'], 'network, run, origin, references, clocks, sites, frames, rule, neighbours, selections'],
      [['run', 'until'], 'name, from, to'],
      [['origin', 'place'], 'time'],
      [['references', 0, 'sigma'], 'code, sigma_ns'],
      [['clocks', 0, 'scale'], 'code, segments'],
      [
        [...SEGMENT, 'drift'],
        'from, at, offset_ns, offset_sigma_ns, rate_ns_per_day, rate_sigma_ns_per_day, covariance_ns2_per_day, reference',
      ],
      [[...SITE, 'sigma_ns'], 'code, name, scale, clock, position, position_sigma_m, delay_ns, delay_sigma_ns, reading_sigma_ns'],
      [[...SITE, 'position', 'geocentric'], 'geodetic, itrs_m'],
      [[...GEODETIC, 'height'], 'latitude_deg, longitude_deg, height_m'],
      [['frames', 2, 'axes'], 'code, name, parent, kind, velocity, at'],
      [['frames', 2, 'velocity', 'speed'], 'beta, speed_c, speed_km_s, rapidity, toward'],
      [[...VELOCITY, 'toward', 'ra'], 'ra_deg, dec_deg, baseline'],
      [['rule', 'fold'], 'code, minimum_fold, sigmas, window'],
      [[...WINDOW, 'width_ns'], 'kind, speed_c, margin_ns'],
      [['neighbours', 'within'], 'within_ns'],
      [['selections', 0, 'rule'], 'code, events'],
    ])('%j as an unknown field', (path, known) => {
      const where = path.map((part, at) => (typeof part === 'number' ? `[${part}]` : `${at === 0 ? '' : '.'}${part}`)).join('');
      expect(problemOf(changed(path, 2))).toBe(`${where}: 2: no such field; known here: ${known}`);
    });
  });

  it('that is no object is refused as a whole', () => {
    expect(problemOf([])).toBe(': is []; it must be an object { }');
    expect(problemOf(null)).toBe(': is null; it must be an object { }');
  });
});
