import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { C_M_S } from '#shared/constants';
import { constantOrientation, type EarthOrientation } from '#shared/earth/earth-orientation';
import { EARTH_ROTATION_RAD_S, earthRotationAngleRad } from '#shared/earth/earth-rotation-angle';
import { eccentricitySquared, type Ellipsoid, geodeticToItrs, itrsToGeodetic, WGS84 } from '#shared/earth/ellipsoid';
import { celestialPole, gcrsToIntermediate, ttCenturies } from '#shared/earth/precession-nutation';
import { earthRotation } from '#shared/earth/rotation';
import { fixedSiteWorldline, separationBounds } from '#shared/earth/worldline';
import { apply, cross, dot, type Mat3, norm, subtract, type Vec3 } from '#shared/relativity/vector';
import { type Worldline } from '#shared/relativity/worldline';
import { addPicoseconds, type Instant, instantOf } from '#shared/time/instant';
import { earthBarycentricState } from '../../backend/frames/earth-series';
import { earthBarycentricPlaceM, earthBarycentricVelocityMS } from '../../backend/frames/ephemeris';

// Rows are copied from published or library values; each carries its source and whether that was seen (confirmed), computed by a library,
// derived from the cited formula, or remembered (memory). Left out are the rows on quantities that nothing here computes: Greenwich
// sidereal time by the equinox, the normal potential, the Earth's heliocentric speed.

// Accuracies that the product states.
const GEODETIC_M = 1e-6;
const DISTANCE_M = 1e-3;
/** What interpolation between the knots may add to the series. */
const INTERPOLATED_VELOCITY_MS = 1e-4;
const INTERPOLATED_PLACE_M = 1;
const ARCSEC_RAD = Math.PI / 648_000;
/** Stated is 1 arcsecond; the 77 terms and the hourly grid come to 1 mas, and this keeps it so. */
const ORIENTATION_RAD = 2e-3 * ARCSEC_RAD;
/** Places of some 6e6 m in doubles, twice. */
const ROUNDING_M = 1e-8;
const AU_M = 149_597_870_700;

/** TAI - UTC on the days of the rows, seconds. Source: IERS leap-second list. */
const TAI_MINUS_UTC_S: Readonly<Record<string, number>> = { 1987: 23, 2000: 32, 2005: 32, 2007: 33, 2015: 36, 2017: 37, 2026: 37 };

function leapSecondsOf(utc: string): number {
  const year = utc.slice(0, 4);
  // The one row in a year with a leap second inside it.
  return year === '2015' && utc < '2015-07-01' ? 35 : TAI_MINUS_UTC_S[year]!;
}

function instantOfUtc(utc: string): Instant {
  return instantOf(Date.parse(utc.endsWith('Z') ? utc : `${utc}Z`) / 1000 + leapSecondsOf(utc), 0);
}

function orientationOf(ut1MinusTaiS: number, poleXArcsec: number, poleYArcsec: number): EarthOrientation {
  const values = { ut1MinusTaiS, poleXRad: poleXArcsec * ARCSEC_RAD, poleYRad: poleYArcsec * ARCSEC_RAD };
  return { valuesAt: () => values, warningAt: () => undefined };
}

/** The angle of the rotation that takes one matrix into the other, radians. */
function angleBetween(a: Mat3, b: Mat3): number {
  // Half the sum of the cross products of the rows: the sine of the angle along its axis.
  const sines = [0, 1, 2].map((row) => cross(a[row as 0 | 1 | 2], b[row as 0 | 1 | 2]));
  return norm([0, 1, 2].map((axis) => sines.reduce((sum, sine) => sum + sine[axis as 0 | 1 | 2] / 2, 0)) as unknown as Vec3);
}

const transposed = (m: Mat3): Mat3 => [
  [m[0][0], m[1][0], m[2][0]],
  [m[0][1], m[1][1], m[2][1]],
  [m[0][2], m[1][2], m[2][2]],
];

/** Time that light needs from one worldline at an instant to the other, seconds, solved on the receiver's worldline. */
function lightTimeS(from: Worldline, to: Worldline, instant: Instant): number {
  const start = from.placeAt(instant);
  let timeS = 0;
  for (let round = 0; round < 6; round++)
    timeS = norm(subtract(to.placeAt(addPicoseconds(instant, Math.round(timeS * 1e12))), start)) / C_M_S;
  return timeS;
}

interface Row {
  readonly id: string;
  readonly inputs: Readonly<Record<string, unknown>>;
  readonly expected: unknown;
  readonly tolerance: { readonly abs: number; readonly rel?: number };
  readonly source: string;
  readonly status: string;
}

const readJson = (name: string): unknown => JSON.parse(readFileSync(new URL(name, import.meta.url), 'utf8'));
const rows = readJson('./checks/earth.json') as readonly Row[];
const unused = new Set(rows.map(({ id }) => id));

/** Runs a check on the rows whose name starts so, each under its own source. */
function check(prefix: string, behaviour: string, body: (row: Row) => void): void {
  const matching = rows.filter(({ id }) => id.startsWith(prefix));
  if (matching.length === 0) throw new Error(`no row ${prefix}`);
  for (const row of matching) {
    unused.delete(row.id);
    it(`${row.id} ${behaviour} (${row.status}; ${row.source})`, () => {
      body(row);
    });
  }
}

function expectVector(actual: Vec3, expected: Vec3, tolerance: number): void {
  expect(norm(subtract(actual, expected)), `${String(actual)} against ${String(expected)}`).toBeLessThan(tolerance);
}

const siteOf = ([latitudeDeg, longitudeDeg, heightM]: Vec3): Vec3 => geodeticToItrs({ latitudeDeg, longitudeDeg, heightM });

/** Published Earth-fixed places of three detectors (LIGO-T980044; Virgo), as in D-LT-01. */
const detectors = rows.find(({ id }) => id === 'D-LT-01')!.inputs['sites_ecef_m'] as Readonly<Record<string, Vec3>>;

describe('the ellipsoid against published values', () => {
  check('B-WGS-01', 'has the constants of WGS 84', ({ expected, tolerance }) => {
    const { a_m, inv_f, b_m, e2 } = expected as Record<'a_m' | 'inv_f' | 'b_m' | 'e2', number>;
    expect([WGS84.semiMajorM, WGS84.inverseFlattening]).toEqual([a_m, inv_f]);
    expect(Math.abs(eccentricitySquared(WGS84) - e2)).toBeLessThan(1e-16);
    expect(Math.abs(geodeticToItrs({ latitudeDeg: 90, longitudeDeg: 0, heightM: 0 })[2] - b_m)).toBeLessThan(tolerance.abs);
  });

  for (const id of ['B-ECEF-01', 'B-ECEF-03']) {
    check(id, 'places a detector', ({ inputs, expected, tolerance }) => {
      const { lat_deg, lon_deg, h_m } = inputs as Record<'lat_deg' | 'lon_deg' | 'h_m', number>;
      expectVector(siteOf([lat_deg, lon_deg, h_m]), expected as Vec3, tolerance.abs);
    });
  }

  check('B-ECEF-10', 'places poles, equator and antimeridian', ({ inputs, expected, tolerance }) => {
    (inputs['lat_lon_h'] as readonly Vec3[]).forEach((place, index) => {
      expectVector(siteOf(place), (expected as readonly Vec3[])[index]!, tolerance.abs);
    });
  });

  // GRS 80: Moritz 2000, Journal of Geodesy 74, 128. WGS 72: NGA; both as the reference library has them.
  const ellipsoids: Readonly<Record<string, Ellipsoid>> = {
    WGS84,
    GRS80: { semiMajorM: 6_378_137, inverseFlattening: 298.257222101 },
    WGS72: { semiMajorM: 6_378_135, inverseFlattening: 298.26 },
  };
  check('B-GD2GC', 'places a point on three ellipsoids', ({ inputs, expected, tolerance }) => {
    const { lat_rad, lon_rad, h_m } = inputs as Record<'lat_rad' | 'lon_rad' | 'h_m', number>;
    const place = { latitudeDeg: lat_rad / ARCSEC_RAD / 3600, longitudeDeg: lon_rad / ARCSEC_RAD / 3600, heightM: h_m };
    const ellipsoid = ellipsoids[inputs['ellipsoid'] as string]!;
    expectVector(geodeticToItrs(place, ellipsoid), expected as Vec3, tolerance.abs);
    const back = itrsToGeodetic(expected as Vec3, ellipsoid);
    expectVector(geodeticToItrs(back, ellipsoid), expected as Vec3, tolerance.abs);
    expect(Math.abs(back.heightM - h_m)).toBeLessThan(tolerance.abs);
  });

  check('B-DIST-01', 'gives the chord, not the way along the ground', ({ inputs, expected, tolerance }) => {
    const chordM = norm(subtract(siteOf(inputs['from'] as Vec3), siteOf(inputs['to'] as Vec3)));
    const { chord_m, geodesic_m } = expected as Record<'chord_m' | 'geodesic_m', number>;
    expect(Math.abs(chordM - chord_m)).toBeLessThan(tolerance.abs);
    expect(geodesic_m - chordM).toBeGreaterThan(28_000);
  });

  check('D-LT-01', 'gives the light times between three detectors', ({ expected, tolerance }) => {
    for (const [pair, lightTimeMs] of Object.entries(expected as Record<string, number>)) {
      const [a, b] = pair.split('-') as [string, string];
      expect(Math.abs((norm(subtract(detectors[a]!, detectors[b]!)) / C_M_S) * 1e3 - lightTimeMs)).toBeLessThan(tolerance.abs);
    }
  });

  check('D-SN-05', 'gives the light times between the detectors of 1987', ({ inputs, expected, tolerance }) => {
    const places = inputs['coordinates_deg'] as Record<string, [number, number]>;
    const names: Record<string, string> = { KII: 'kamiokande_ii', IMB: 'imb', Baksan: 'baksan' };
    for (const [pair, lightTimeMs] of Object.entries(expected as Record<string, number>)) {
      const [a, b] = pair.split('-').map((name) => siteOf([...places[names[name]!]!, 0])) as [Vec3, Vec3];
      expect(Math.abs((norm(subtract(a, b)) / C_M_S) * 1e3 - lightTimeMs)).toBeLessThan(tolerance.abs);
    }
  });
});

describe('the rotation against published values', () => {
  check('B-ERA-01', 'gives the Earth rotation angle', ({ inputs, expected, tolerance }) => {
    const [whole, rest] = inputs['ut1_jd'] as [number, number];
    const ut1S = (whole - 2_440_587.5 + rest) * 86_400;
    expect(Math.abs(earthRotationAngleRad(ut1S, 0) - (expected as number))).toBeLessThan(tolerance.abs);
  });

  check('B-C2T-01', 'gives the matrix, but for the celestial pole offsets that no table here carries', ({ inputs, expected }) => {
    const orientation = orientationOf(
      (inputs['UT1-UTC_s'] as number) - leapSecondsOf(inputs['utc'] as string),
      inputs['xp_arcsec'] as number,
      inputs['yp_arcsec'] as number,
    );
    const matrix = transposed(earthRotation(orientation).rotationAt(instantOfUtc(inputs['utc'] as string)));
    // The row's own tolerance of 1e-11 is for the full series with offsets of 0.3 mas.
    expect(angleBetween(matrix, expected as Mat3)).toBeLessThan(ORIENTATION_RAD);
  });

  check('B-GCRS-0', 'places a detector in the inertial axes', ({ inputs, expected, tolerance }) => {
    const itrsM = (inputs['site_ecef_m'] ?? siteOf(inputs['lat_lon_h'] as Vec3)) as Vec3;
    const utc = inputs['utc'] as string;
    const ut1MinusTaiS = (inputs['UT1-UTC_s'] as number) - leapSecondsOf(utc);
    const orientation = orientationOf(ut1MinusTaiS, inputs['xp_arcsec'] as number, inputs['yp_arcsec'] as number);
    const site = fixedSiteWorldline(itrsM, earthRotation(orientation));
    expectVector(site.placeAt(instantOfUtc(utc)), expected as Vec3, tolerance.abs);
  });

  check('B-GCRS-20', 'is kilometres away from turning by the rotation angle alone', ({ inputs, expected, tolerance }) => {
    const instant = instantOfUtc(inputs['utc'] as string);
    const ut1MinusTaiS = -leapSecondsOf(inputs['utc'] as string);
    const [x, y, z] = detectors['L1']!;
    const angle = earthRotationAngleRad(instant.taiS, ut1MinusTaiS);
    const shortcut: Vec3 = [Math.cos(angle) * x - Math.sin(angle) * y, Math.sin(angle) * x + Math.cos(angle) * y, z];
    const full = fixedSiteWorldline([x, y, z], earthRotation(constantOrientation(ut1MinusTaiS))).placeAt(instant);
    expect(Math.abs(norm(subtract(full, shortcut)) / 1e3 - (expected as number))).toBeLessThan(tolerance.abs);
  });

  check('D-SN-09', 'gives the order in which one plane wave reaches three detectors', ({ inputs, expected, tolerance }) => {
    const instant = instantOfUtc(inputs['utc'] as string);
    const rotation = earthRotation(constantOrientation((inputs['UT1-UTC_s'] as number) - 23));
    // The row's 05h35m28.03s, -69d16m11.8s.
    const raRad = (5 * 3600 + 35 * 60 + 28.03) * 15 * ARCSEC_RAD;
    const decRad = -(69 * 3600 + 16 * 60 + 11.8) * ARCSEC_RAD;
    const toSource: Vec3 = [Math.cos(decRad) * Math.cos(raRad), Math.cos(decRad) * Math.sin(raRad), Math.sin(decRad)];
    const { order, ms_against_geocentre } = expected as { order: string[]; ms_against_geocentre: Record<string, number> };
    const places = inputs['coordinates_deg'] as Record<string, [number, number]>;
    const delaysMs = order.map((name) => {
      const place = fixedSiteWorldline(siteOf([...places[name]!, 0]), rotation).placeAt(instant);
      return (-dot(place, toSource) / C_M_S) * 1e3;
    });
    order.forEach((name, index) => expect(Math.abs(delaysMs[index]! - ms_against_geocentre[name]!)).toBeLessThan(tolerance.abs));
    expect(delaysMs).toEqual(delaysMs.toSorted((a, b) => a - b));
  });
});

describe('worldlines against published values', () => {
  const rotation = earthRotation(constantOrientation(-37));
  const instant = instantOf(1_700_000_000, 0);

  check('B-ROTV-01', 'bounds the speed of the equator from just above', ({ expected, tolerance }) => {
    const site = fixedSiteWorldline([WGS84.semiMajorM, 0, 0], rotation);
    const speedMS = norm(subtract(site.placeAt(addPicoseconds(instant, 1e12)), site.placeAt(instant)));
    expect(Math.abs(speedMS - (expected as number))).toBeLessThan(tolerance.abs);
    expect(site.mostSpeedMS).toBeGreaterThan(speedMS);
    // Polar motion of 2 arcseconds on each axis, which the bound allows for, is 0.01 m/s.
    expect(site.mostSpeedMS - speedMS).toBeLessThan(0.02);
  });

  check('B-SAG-01', 'makes light that is handed once round the equator late by the Sagnac time', ({ expected, tolerance }) => {
    const sites = 720;
    const round = Array.from({ length: sites }, (_, index) => {
      const angle = (2 * Math.PI * index) / sites;
      return fixedSiteWorldline([WGS84.semiMajorM * Math.cos(angle), WGS84.semiMajorM * Math.sin(angle), 0], rotation);
    });
    const lateS = round.reduce((sum, from, index) => {
      const to = round[(index + 1) % sites]!;
      return sum + lightTimeS(from, to, instant) - norm(subtract(from.itrsM, to.itrsM)) / C_M_S;
    }, 0);
    expect(Math.abs(lateS * 1e9 - (expected as number))).toBeLessThan(tolerance.abs);
  });

  check('B-SAG-02', 'has the rate in the Sagnac factor', ({ expected, tolerance }) => {
    expect(Math.abs((2 * EARTH_ROTATION_RAD_S) / C_M_S ** 2 / (expected as number) - 1)).toBeLessThan(tolerance.rel!);
  });

  check('B-SAG-03', 'makes light between detectors late by what they turn meanwhile', ({ inputs, expected, tolerance }) => {
    (inputs['pairs'] as [string, string][]).forEach(([from, to], index) => {
      const [start, end] = [fixedSiteWorldline(detectors[from]!, rotation), fixedSiteWorldline(detectors[to]!, rotation)];
      const lateNs = (lightTimeS(start, end, instant) - norm(subtract(start.itrsM, end.itrsM)) / C_M_S) * 1e9;
      // Beyond the row's 0.001 ns: the formula is of first order, the next is of the order of 1e-6 of it; a picosecond is the clock's unit.
      expect(Math.abs(lateNs - (expected as number[])[index]!)).toBeLessThan(tolerance.abs * 2);
    });
  });
});

describe("the Earth's barycentric motion against published values", () => {
  check('B-BVEL', 'gives the velocity', ({ inputs, expected }) => {
    const velocity = earthBarycentricVelocityMS(instantOfUtc(inputs['utc'] as string));
    const { v_km_s, speed_km_s } = expected as { v_km_s: Vec3; speed_km_s: number };
    // Half of the last digit given: the rows' own 1.5 m/s makes room for a coarser ephemeris.
    const digitsMS = 0.05 + INTERPOLATED_VELOCITY_MS;
    v_km_s.forEach((component, axis) => expect(Math.abs(velocity[axis as 0 | 1 | 2] - component * 1e3)).toBeLessThan(digitsMS));
    expect(Math.abs(norm(velocity) - speed_km_s * 1e3)).toBeLessThan(digitsMS);
  });

  check('B-BARY-01', 'gives place and velocity', ({ inputs, expected, tolerance }) => {
    const [start, days] = inputs['tdb'] as [number, number];
    // Whole days, whole seconds and the rest apart, so that nothing of the rest is lost. The series takes the row's TDB for its TT.
    const restS = (days % 1) * 86_400;
    const startS = (start - 2_440_587.5 + Math.floor(days)) * 86_400;
    const instant = instantOf(startS + Math.floor(restS), Math.round((restS % 1) * 1e12) - 32.184e12);
    const { pb, vb } = expected as Record<'pb' | 'vb', Vec3>;
    const { placeM, velocityMS } = earthBarycentricState(instant);
    placeM.forEach((component, axis) => expect(Math.abs(component / AU_M - pb[axis as 0 | 1 | 2])).toBeLessThan(tolerance.abs));
    velocityMS.forEach((component, axis) =>
      expect(Math.abs((component * 86_400) / AU_M - vb[axis as 0 | 1 | 2])).toBeLessThan(tolerance.abs),
    );
    expectVector(earthBarycentricVelocityMS(instant), velocityMS, INTERPOLATED_VELOCITY_MS);
    expectVector(earthBarycentricPlaceM(instant), placeM, INTERPOLATED_PLACE_M);
  });
});

describe('every row', () => {
  it('is used', () => {
    expect([...unused]).toEqual([]);
  });
});

/** Made by erfa-earth.py with the reference library's full IAU 2006/2000A model; library values throughout. */
interface Reference {
  readonly library: string;
  readonly sites: readonly { readonly itrsM: Vec3 }[];
  readonly matrices: readonly (Instant &
    Given & { xRad: number; yRad: number; locatorRad: number; rotationAngleRad: number; gcrsToItrs: number[] })[];
  readonly pairs: readonly (Given & { a: Instant & { site: number }; b: Instant & { site: number }; distanceM: number })[];
  readonly geodetic: readonly (Place & { readonly itrsM: Vec3; readonly back: Place })[];
  readonly barycentric: readonly (Instant & { readonly placeM: Vec3; readonly velocityMS: Vec3 })[];
}
interface Given {
  readonly ut1MinusTaiS: number;
  readonly poleXArcsec: number;
  readonly poleYArcsec: number;
}
interface Place {
  readonly latitudeDeg: number;
  readonly longitudeDeg: number;
  readonly heightM: number;
}

const reference = readJson('./erfa-earth.json') as Reference;
const rotationOf = (given: Given) => earthRotation(orientationOf(given.ut1MinusTaiS, given.poleXArcsec, given.poleYArcsec));
const most = (values: readonly number[]): number => values.reduce((a, b) => Math.max(a, b), 0);

/** Asserts that no value exceeds the limit, and says how near the worst comes. */
function expectWithin(what: string, values: readonly number[], limit: number, unit: string): void {
  expect(values.length).toBeGreaterThan(0);
  console.info(`${what}: at most ${most(values).toPrecision(3)} ${unit} of ${limit} allowed, ${values.length} cases`);
  expect(most(values)).toBeLessThan(limit);
}

describe(`the Earth against ${reference.library}`, () => {
  it('turns geodetic places into Earth-fixed ones and back', () => {
    expectWithin(
      'geodetic to Earth-fixed',
      reference.geodetic.map((row) => norm(subtract(geodeticToItrs(row), row.itrsM))),
      GEODETIC_M,
      'm',
    );
    const back = reference.geodetic.map((row) => ({ mine: itrsToGeodetic(row.itrsM), theirs: row.back }));
    expectWithin(
      'height',
      back.map(({ mine, theirs }) => Math.abs(mine.heightM - theirs.heightM)),
      GEODETIC_M,
      'm',
    );
    // 1e-12 degrees are 1e-7 m along the meridian. The library's own way back is good to that near the ground only.
    const nearGround = back.filter(({ theirs }) => Math.abs(theirs.heightM) < 10_000);
    expectWithin(
      'latitude',
      nearGround.map(({ mine, theirs }) => Math.abs(mine.latitudeDeg - theirs.latitudeDeg)),
      1e-12,
      'degrees',
    );
    expectWithin(
      'latitude as it was given',
      reference.geodetic.map((row) => Math.abs(itrsToGeodetic(row.itrsM).latitudeDeg - row.latitudeDeg)),
      1e-12,
      'degrees',
    );
  });

  it('gives the Earth rotation angle', () => {
    const errors = reference.matrices.map((row) => {
      // The angle runs on within the second; the table of the reference holds it at the picosecond.
      const angle = earthRotationAngleRad(row.taiS, row.ut1MinusTaiS + row.ps * 1e-12) - row.rotationAngleRad;
      return Math.abs(Math.sin(angle / 2) * 2);
    });
    // The library multiplies before it splits off whole turns: 1e-13 is its own rounding.
    expectWithin('Earth rotation angle', errors, 1e-13, 'rad');
  });

  it('places pole and intermediate origin within 1.5 mas', () => {
    const mas = reference.matrices.map((row) => {
      const pole = celestialPole(ttCenturies(row.taiS));
      return { pole: Math.hypot(pole.xRad - row.xRad, pole.yRad - row.yRad), origin: Math.abs(pole.locatorRad - row.locatorRad) };
    });
    const toMas = 1e3 / ARCSEC_RAD;
    expectWithin(
      'celestial pole',
      mas.map(({ pole }) => pole * toMas),
      1.5,
      'mas',
    );
    expectWithin(
      'intermediate origin',
      mas.map(({ origin }) => origin * toMas),
      0.01,
      'mas',
    );
  });

  it('turns from Earth-fixed to inertial axes within 2 mas, far inside the stated arcsecond', () => {
    const angles = reference.matrices.map((row) => {
      const m = row.gcrsToItrs as [number, number, number, number, number, number, number, number, number];
      const theirs: Mat3 = [m.slice(0, 3), m.slice(3, 6), m.slice(6, 9)] as unknown as Mat3;
      return angleBetween(transposed(rotationOf(row).rotationAt(row)), theirs);
    });
    expectWithin(
      'orientation',
      angles.map((angle) => (angle / ARCSEC_RAD) * 1e3),
      (ORIENTATION_RAD / ARCSEC_RAD) * 1e3,
      'mas',
    );
  });

  it('gives the distance between two events within 1 s', () => {
    const errors = reference.pairs.map((row) => {
      const rotation = rotationOf(row);
      const [a, b] = [row.a, row.b].map((end) => fixedSiteWorldline(reference.sites[end.site]!.itrsM, rotation).placeAt(end)) as [
        Vec3,
        Vec3,
      ];
      return Math.abs(norm(subtract(b, a)) - row.distanceM);
    });
    expectWithin('distance', errors, DISTANCE_M, 'm');
  });

  it("sums the Earth's barycentric series as the library does, from 1900 to 2100", () => {
    const states = reference.barycentric.map((row) => ({ mine: earthBarycentricState(row), row }));
    const velocities = states.map(({ mine, row }) => norm(subtract(mine.velocityMS, row.velocityMS)));
    const places = states.map(({ mine, row }) => norm(subtract(mine.placeM, row.placeM)));
    expectWithin('series, velocity', velocities, 1e-7, 'm/s');
    // The library counts days in a double, whose grain here is 0.6 microseconds or 20 mm.
    expectWithin('series, place', places, 0.1, 'm');
  });

  it("gives the Earth's barycentric velocity and place between the knots", () => {
    const velocities = reference.barycentric.map((row) => norm(subtract(earthBarycentricVelocityMS(row), row.velocityMS)));
    const places = reference.barycentric.map((row) => norm(subtract(earthBarycentricPlaceM(row), row.placeM)));
    expectWithin('barycentric velocity', velocities, INTERPOLATED_VELOCITY_MS, 'm/s');
    expectWithin('barycentric place', places, INTERPOLATED_PLACE_M, 'm');
  });
});

describe('on any Earth', () => {
  const latitudes = fc.double({ min: -90, max: 90, noNaN: true });
  const longitudes = fc.double({ min: -180, max: 180, noNaN: true });
  const heights = fc.double({ min: -10_000, max: 4e7, noNaN: true });
  const places = fc.record({ latitudeDeg: latitudes, longitudeDeg: longitudes, heightM: heights });
  const ground = fc.record({ latitudeDeg: latitudes, longitudeDeg: longitudes, heightM: fc.double({ min: -500, max: 9000, noNaN: true }) });
  const instants = fc.record({ taiS: fc.integer({ min: 0, max: 2_500_000_000 }), ps: fc.integer({ min: 0, max: 999_999_999_999 }) });
  const orientations = fc
    .tuple(
      fc.double({ min: -60, max: 0, noNaN: true }),
      fc.double({ min: -1, max: 1, noNaN: true }),
      fc.double({ min: -1, max: 1, noNaN: true }),
    )
    .map(([ut1MinusTaiS, x, y]) => orientationOf(ut1MinusTaiS, x, y));

  it('a geodetic place comes back from its Earth-fixed one', () => {
    fc.assert(
      fc.property(places, (place) => {
        const itrsM = geodeticToItrs(place);
        const back = itrsToGeodetic(itrsM);
        expect(norm(subtract(geodeticToItrs(back), itrsM))).toBeLessThan(1e-7);
        expect(Math.abs(back.latitudeDeg - place.latitudeDeg)).toBeLessThan(1e-12);
        expect(Math.abs(back.heightM - place.heightM)).toBeLessThan(1e-7);
      }),
    );
  });

  it('any point, the centre included, comes back from its geodetic place', () => {
    const sizes = fc.double({ min: -1, max: 10, noNaN: true }).map((power) => 10 ** power);
    const component = fc.double({ min: -1, max: 1, noNaN: true });
    fc.assert(
      fc.property(sizes, component, component, component, (sizeM, x, y, z) => {
        const point: Vec3 = [x * sizeM, y * sizeM, z * sizeM];
        // Rounding grows with the distance: 1e-8 m up to the Earth's radius, in proportion beyond.
        const limitM = ROUNDING_M * Math.max(1, sizeM / WGS84.semiMajorM) * 2;
        expect(norm(subtract(geodeticToItrs(itrsToGeodetic(point)), point))).toBeLessThan(limitM);
      }),
    );
  });

  it('the rotation is orthonormal and keeps handedness', () => {
    fc.assert(
      fc.property(orientations, instants, (orientation, instant) => {
        const m = earthRotation(orientation).rotationAt(instant);
        const columns = transposed(m);
        for (const i of [0, 1, 2] as const) {
          for (const j of [0, 1, 2] as const) expect(Math.abs(dot(columns[i], columns[j]) - (i === j ? 1 : 0))).toBeLessThan(1e-15);
        }
        expect(Math.abs(dot(cross(m[0], m[1]), m[2]) - 1)).toBeLessThan(1e-15);
      }),
    );
  });

  it('the intermediate frame is orthonormal', () => {
    fc.assert(
      fc.property(fc.double({ min: -1, max: 1, noNaN: true }), (t) => {
        const m = gcrsToIntermediate(celestialPole(t));
        for (const i of [0, 1, 2] as const) {
          for (const j of [0, 1, 2] as const) expect(Math.abs(dot(m[i], m[j]) - (i === j ? 1 : 0))).toBeLessThan(1e-15);
        }
      }),
    );
  });

  it('two sites are the chord apart at one instant, within the bounds that are given for it', () => {
    fc.assert(
      fc.property(orientations, instants, ground, ground, (orientation, instant, first, second) => {
        const rotation = earthRotation(orientation);
        const [a, b] = [fixedSiteWorldline(geodeticToItrs(first), rotation), fixedSiteWorldline(geodeticToItrs(second), rotation)];
        const apartM = norm(subtract(b.placeAt(instant), a.placeAt(instant)));
        expect(Math.abs(apartM - norm(subtract(b.itrsM, a.itrsM)))).toBeLessThan(ROUNDING_M);
        const bounds = separationBounds(a, b);
        expect(apartM).toBeGreaterThanOrEqual(bounds.leastM);
        expect(apartM).toBeLessThanOrEqual(bounds.mostM);
        expect(bounds.mostM - bounds.leastM).toBeLessThan(6 * ROUNDING_M);
      }),
    );
  });

  it('no site moves faster or gets farther out than its bounds say', () => {
    fc.assert(
      fc.property(orientations, instants, ground, fc.integer({ min: 1, max: 7200 }), (orientation, instant, place, seconds) => {
        const site = fixedSiteWorldline(geodeticToItrs(place), earthRotation(orientation));
        const [before, after] = [site.placeAt(instant), site.placeAt(instantOf(instant.taiS + seconds, instant.ps))];
        expect(norm(subtract(after, before))).toBeLessThanOrEqual(site.mostSpeedMS * seconds + ROUNDING_M);
        expect(norm(before)).toBeLessThanOrEqual(site.mostRadiusM);
      }),
    );
  });

  it('placing a site and applying the matrix agree', () => {
    fc.assert(
      fc.property(orientations, instants, ground, (orientation, instant, place) => {
        const rotation = earthRotation(orientation);
        const itrsM = geodeticToItrs(place);
        expectVector(fixedSiteWorldline(itrsM, rotation).placeAt(instant), apply(rotation.rotationAt(instant), itrsM), ROUNDING_M);
      }),
    );
  });
});
