import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { C_M_S } from '#shared/constants';
import { aberrate, aberratedAngleRad, unaberratedAngleRad } from '#shared/relativity/aberration';
import { boostEvent, boostMatrix, separationInFrame, timeDifferenceInFrame } from '#shared/relativity/boost';
import { anglesOf, galacticToIcrs, icrsToGalactic, unitFromAngles } from '#shared/relativity/direction';
import {
  BEAMING_EXPONENT,
  dopplerOfMovingReceiver,
  dopplerOfMovingSource,
  energyShareWithin,
  photonShareWithin,
} from '#shared/relativity/doppler';
import { type FourVector, multiply, transform } from '#shared/relativity/four-vector';
import {
  addVelocities,
  compose,
  frameFromSpinor,
  GEOCENTRIC,
  inTurnedAxes,
  type InertialFrame,
  velocityInFrame,
} from '#shared/relativity/frame';
import { directionsOfThreeSites, planeWaveDelayS, ringOf } from '#shared/relativity/plane-wave';
import { inverse, product } from '#shared/relativity/spinor';
import { turningVelocity } from '#shared/relativity/turning';
import { add, cross, dot, norm, opposite, scale, subtract, unitOf, type Vec3 } from '#shared/relativity/vector';
import { AT_REST, type FourVelocity, fourVelocity, oppositeVelocity, rapidity, shortOfLightC, speedC } from '#shared/relativity/velocity';

/** Rounding of a few dozen operations on doubles. */
const ROUNDING = 1e-14;
/** Promised for composition, Wigner angle, Doppler and aberration. */
const PROMISED = 1e-12;
/** Promised for gamma and rapidity up to gamma 1e6. */
const PROMISED_FAST = 1e-9;

/** An even spread of numbers with both ends: doubles by bit pattern would be nearly all next to 0. */
const between = (min: number, max: number): fc.Arbitrary<number> =>
  fc.integer({ min: 0, max: 1e9 }).map((k) => min + ((max - min) * k) / 1e9);
const unitVector: fc.Arbitrary<Vec3> = fc
  .tuple(between(-1, 1), between(0, 2 * Math.PI))
  .map(([z, angle]) => [Math.sqrt(1 - z * z) * Math.cos(angle), Math.sqrt(1 - z * z) * Math.sin(angle), z]);
const velocityOfRapidity = (min: number, max: number): fc.Arbitrary<FourVelocity> =>
  fc.tuple(between(min, max), unitVector).map(([w, unit]) => fourVelocity(scale(Math.sinh(w), unit)));

/** Up to gamma 10. */
const velocity = velocityOfRapidity(0, 3);
/** Up to gamma 1e6. */
const fastVelocity = velocityOfRapidity(0, 14.5);
const lengthM = between(-1e7, 1e7);
const event: fc.Arbitrary<FourVector> = fc.tuple(lengthM, lengthM, lengthM, lengthM).map(([ctM, x, y, z]) => ({ ctM, xM: [x, y, z] }));
/** A frame with a rotation in it. */
const frame: fc.Arbitrary<InertialFrame> = fc
  .array(velocityOfRapidity(0, 1), { minLength: 1, maxLength: 3 })
  .map((links) => links.reduce(compose, GEOCENTRIC));

const sizeOf = (e: FourVector): number => Math.max(Math.abs(e.ctM), norm(e.xM));
const interval = (e: FourVector): number => (e.ctM - norm(e.xM)) * (e.ctM + norm(e.xM));
function expectSameEvent(a: FourVector, b: FourVector, toleranceM: number): void {
  expect(Math.abs(a.ctM - b.ctM)).toBeLessThanOrEqual(toleranceM);
  expect(norm(subtract(a.xM, b.xM))).toBeLessThanOrEqual(toleranceM);
}
const entries = (m: readonly (readonly number[])[]): readonly number[] => m.flat();
const most = (m: readonly (readonly number[])[]): number => Math.max(...entries(m).map(Math.abs));
function expectSameMatrix(a: readonly (readonly number[])[], b: readonly (readonly number[])[], tolerance: number): void {
  for (const [index, value] of entries(a).entries()) expect(Math.abs(value - entries(b)[index]!)).toBeLessThanOrEqual(tolerance);
}

describe('a boost', () => {
  it('preserves the interval', () => {
    fc.assert(
      fc.property(fastVelocity, event, (v, e) => {
        const seen = boostEvent(v, e);
        const scaleM = v.gamma * sizeOf(e) + Number.MIN_VALUE;
        expect(Math.abs(interval(seen) - interval(e))).toBeLessThanOrEqual(ROUNDING * scaleM * scaleM);
      }),
    );
  });

  it('is one thing as function, matrix, time difference and separation', () => {
    fc.assert(
      fc.property(fastVelocity, event, (v, e) => {
        const seen = boostEvent(v, e);
        const toleranceM = ROUNDING * v.gamma * sizeOf(e);
        expectSameEvent(seen, transform(boostMatrix(v), e), toleranceM);
        const dtS = e.ctM / C_M_S;
        expectSameEvent(seen, { ctM: C_M_S * timeDifferenceInFrame(v, dtS, e.xM), xM: separationInFrame(v, dtS, e.xM) }, toleranceM);
      }),
    );
  });

  it('takes a frame to rest in itself and the base to the opposite velocity', () => {
    fc.assert(
      fc.property(velocity, (v) => {
        const own = boostEvent(v, { ctM: v.gamma, xM: v.gammaBeta });
        expectSameEvent(own, { ctM: 1, xM: [0, 0, 0] }, ROUNDING * v.gamma ** 2);
        expect(norm(velocityInFrame(v, v).gammaBeta)).toBeLessThan(ROUNDING * v.gamma);
        const base = velocityInFrame(v, AT_REST).gammaBeta;
        expect(norm(add(base, v.gammaBeta))).toBeLessThan(ROUNDING * v.gamma);
      }),
    );
  });

  it('measures a velocity as it measures the events of its path', () => {
    fc.assert(
      fc.property(velocity, velocity, (v, u) => {
        const seen = boostEvent(v, { ctM: u.gamma, xM: u.gammaBeta });
        expectSameEvent({ ctM: velocityInFrame(v, u).gamma, xM: velocityInFrame(v, u).gammaBeta }, seen, ROUNDING * v.gamma * u.gamma);
      }),
    );
  });
});

describe('frames as a group', () => {
  const both = (first: InertialFrame, then: InertialFrame): InertialFrame => frameFromSpinor(product(then.spinor, first.spinor));

  it('compose as their matrices do, rotations included', () => {
    fc.assert(
      fc.property(frame, frame, (a, b) => {
        const matrix = multiply(b.lorentz, a.lorentz);
        expectSameMatrix(both(a, b).lorentz, matrix, ROUNDING * most(a.lorentz) * most(b.lorentz));
      }),
    );
  });

  it('are associative', () => {
    fc.assert(
      fc.property(frame, frame, frame, (a, b, c) => {
        const left = both(both(a, b), c).lorentz;
        expectSameMatrix(left, both(a, both(b, c)).lorentz, ROUNDING * most(a.lorentz) * most(b.lorentz) * most(c.lorentz));
      }),
    );
  });

  it('have the geocentric frame as identity and an inverse', () => {
    fc.assert(
      fc.property(frame, (a) => {
        expectSameMatrix(both(GEOCENTRIC, a).lorentz, a.lorentz, 0);
        expectSameMatrix(both(a, GEOCENTRIC).lorentz, a.lorentz, 0);
        const back = frameFromSpinor(inverse(a.spinor));
        const identity = GEOCENTRIC.lorentz;
        expectSameMatrix(both(a, back).lorentz, identity, ROUNDING * most(a.lorentz) ** 2);
        expectSameMatrix(multiply(back.lorentz, a.lorentz), identity, ROUNDING * most(a.lorentz) ** 2);
      }),
    );
  });

  it('are a direct boost followed by a turn of the axes', () => {
    fc.assert(
      fc.property(frame, event, (a, e) => {
        const direct = boostEvent(a.velocity, e);
        const seen = transform(a.lorentz, e);
        const toleranceM = ROUNDING * a.velocity.gamma * sizeOf(e);
        expectSameEvent(seen, { ctM: direct.ctM, xM: inTurnedAxes(a.wigner, direct.xM) }, toleranceM);
        // A vector of the turned axes has, in them, the components that it had before the turn: Rodrigues' formula, right-handed.
        const turned = rodrigues(a.wigner.axis, a.wigner.angleRad, direct.xM);
        expect(norm(subtract(inTurnedAxes(a.wigner, turned), direct.xM))).toBeLessThanOrEqual(toleranceM);
      }),
    );
  });
});

function rodrigues(axis: Vec3, angleRad: number, a: Vec3): Vec3 {
  const along = scale(dot(axis, a) * (1 - Math.cos(angleRad)), axis);
  return add(add(scale(Math.cos(angleRad), a), scale(Math.sin(angleRad), cross(axis, a))), along);
}

describe('the Wigner angle', () => {
  it('agrees with the closed formula of two boosts', () => {
    // tan(e/2) = sin t / (k + cos t), k^2 = (g1 + 1)(g2 + 1) / ((g1 - 1)(g2 - 1)). Source: Ungar 1988, Found. Phys. Lett. 1, 57.
    fc.assert(
      fc.property(between(1e-6, 3), between(1e-6, 3), between(0, Math.PI), (w1, w2, t) => {
        const first = fourVelocity([Math.sinh(w1), 0, 0]);
        const second = fourVelocity([Math.sinh(w2) * Math.cos(t), Math.sinh(w2) * Math.sin(t), 0]);
        const { wigner } = compose(compose(GEOCENTRIC, first), second);
        const k = 1 / (Math.tanh(w1 / 2) * Math.tanh(w2 / 2));
        const expected = 2 * Math.atan2(Math.sin(t), k + Math.cos(t));
        expect(Math.abs(wigner.angleRad - expected)).toBeLessThanOrEqual(PROMISED * expected + Number.MIN_VALUE);
        if (expected > PROMISED) expect(wigner.axis[2]).toBeCloseTo(-1, 12);
      }),
    );
  });
  it('turns the sum of two velocities into the sum in the other order', () => {
    fc.assert(
      fc.property(velocity, velocity, (u, v) => {
        const { wigner } = compose(compose(GEOCENTRIC, u), v);
        const turned = inTurnedAxes(wigner, addVelocities(u, v).gammaBeta);
        const swapped = addVelocities(v, u).gammaBeta;
        expect(norm(subtract(turned, swapped))).toBeLessThanOrEqual(ROUNDING * u.gamma * v.gamma);
      }),
    );
  });
});

describe('a chain', () => {
  it('never reaches c', () => {
    fc.assert(
      fc.property(fc.array(velocityOfRapidity(0, 20), { minLength: 1, maxLength: 15 }), (links) => {
        const { velocity: end } = links.reduce(compose, GEOCENTRIC);
        expect(Number.isFinite(end.gamma)).toBe(true);
        expect(end.gamma).toBeGreaterThanOrEqual(1);
        expect(speedC(end)).toBeLessThan(1);
        expect(shortOfLightC(end)).toBeGreaterThan(0);
        expect(rapidity(end)).toBeLessThanOrEqual(links.reduce((sum, link) => sum + rapidity(link), 0) * (1 + PROMISED) + PROMISED);
      }),
    );
  });

  it('adds rapidities on one line, there and back, up to gamma 1e6', () => {
    const parts = fc.array(between(-14.5, 14.5), { minLength: 2, maxLength: 6 }).filter((ws) => {
      let sum = 0;
      return ws.every((w) => Math.abs((sum += w)) <= 14.5);
    });
    fc.assert(
      fc.property(parts, unitVector, (ws, unit) => {
        const links = ws.map((w) => fourVelocity(scale(Math.sinh(w), unit)));
        const { velocity: end, wigner } = links.reduce(compose, GEOCENTRIC);
        const sum = ws.reduce((total, w) => total + w, 0);
        expect(Math.abs(rapidity(end) - Math.abs(sum))).toBeLessThan(PROMISED_FAST);
        expect(Math.abs(end.gamma / Math.cosh(sum) - 1)).toBeLessThan(PROMISED_FAST);
        expect(wigner.angleRad).toBeLessThan(PROMISED_FAST);
      }),
    );
  });

  it('comes back to 1e-9 from rapidity 14.5 by half', () => {
    for (const unit of [[1, 0, 0], unitOf([1, 2, 3]), unitOf([-3, 0.1, 0.7])] as const) {
      const out = fourVelocity(scale(Math.sinh(14.5), unit));
      const end = addVelocities(out, fourVelocity(scale(-Math.sinh(7.25), unit)));
      expect(Math.abs(rapidity(end) - 7.25)).toBeLessThan(PROMISED_FAST);
    }
  });

  it('keeps gamma and rapidity to 1e-9 up to gamma 1e6, against whole-number arithmetic', () => {
    fc.assert(
      fc.property(fc.array(velocityOfRapidity(0, 14.5), { minLength: 2, maxLength: 3 }), (links) => {
        const exact = exactSpeed(links.map(({ gammaBeta }) => gammaBeta));
        fc.pre(exact.gamma <= 1e6);
        const { velocity: end } = links.reduce(compose, GEOCENTRIC);
        expect(Math.abs(end.gamma / exact.gamma - 1)).toBeLessThan(PROMISED_FAST);
        expect(Math.abs(rapidity(end) / Math.asinh(exact.gammaBeta) - 1)).toBeLessThan(PROMISED_FAST);
      }),
    );
  });

  it('keeps 1e-12 below gamma 10, against whole-number arithmetic', () => {
    fc.assert(
      fc.property(fc.array(velocityOfRapidity(0, 1), { minLength: 1, maxLength: 3 }), (links) => {
        const exact = exactSpeed(links.map(({ gammaBeta }) => gammaBeta));
        const { velocity: end } = links.reduce(compose, GEOCENTRIC);
        expect(Math.abs(end.gamma / exact.gamma - 1)).toBeLessThan(PROMISED);
        expect(Math.abs(norm(end.gammaBeta) - exact.gammaBeta)).toBeLessThan(PROMISED * Math.max(exact.gammaBeta, 1e-3));
      }),
    );
  });
});

/** Fixed-point numbers with 240 bits after the point. */
const ONE = 2n ** 240n;
const fixed = (x: number): bigint => {
  // A double in [2^-60, 2^60] is a whole number of 2^-112; smaller ones are cut there.
  const whole = BigInt(Math.trunc(x * 2 ** 52));
  return whole * 2n ** 188n + BigInt(Math.trunc((x * 2 ** 52 - Math.trunc(x * 2 ** 52)) * 2 ** 60)) * 2n ** 128n;
};
const times = (a: bigint, b: bigint): bigint => (a * b) / ONE;
const over = (a: bigint, b: bigint): bigint => (a * ONE) / b;
function rootOf(a: bigint): bigint {
  if (a === 0n) return 0n;
  const square = a * ONE;
  let x = 2n ** BigInt(Math.ceil(square.toString(2).length / 2));
  for (;;) {
    const next = (x + square / x) / 2n;
    if (next >= x) return x;
    x = next;
  }
}
type Fixed3 = readonly [bigint, bigint, bigint];
const fixedDot = (a: Fixed3, b: Fixed3): bigint => times(a[0], b[0]) + times(a[1], b[1]) + times(a[2], b[2]);
const gammaOf = (a: Fixed3): bigint => rootOf(ONE + fixedDot(a, a));

/** The end of a chain by Einstein's law for four-velocities, the last frame's taken back through each parent: 70 digits. */
function exactSpeed(links: readonly Vec3[]): { readonly gamma: number; readonly gammaBeta: number } {
  const [last, ...before] = links.map((link): Fixed3 => [fixed(link[0]), fixed(link[1]), fixed(link[2])]).toReversed();
  const end = before.reduce<Fixed3>((u, v) => {
    const gammaV = gammaOf(v);
    const along = over(fixedDot(u, v), gammaV + ONE) + gammaOf(u);
    return [u[0] + times(v[0], along), u[1] + times(v[1], along), u[2] + times(v[2], along)];
  }, last!);
  const toNumber = (a: bigint): number => Number(a / 2n ** 140n) / 2 ** 100;
  return { gamma: toNumber(gammaOf(end)), gammaBeta: toNumber(rootOf(fixedDot(end, end))) };
}

describe('the turning frame of a spacelike pair', () => {
  const spacelike = fc
    .tuple(between(-0.999, 0.999), between(1, 2e7), unitVector)
    .map(([part, distanceM, unit]) => ({ dtS: (part * distanceM) / C_M_S, dxM: scale(distanceM, unit) }));

  it('makes the pair simultaneous', () => {
    fc.assert(
      fc.property(spacelike, ({ dtS, dxM }) => {
        const turning = turningVelocity(dtS, dxM)!;
        expect(Math.abs(timeDifferenceInFrame(turning, dtS, dxM))).toBeLessThanOrEqual(ROUNDING * turning.gamma * Math.abs(dtS));
      }),
    );
  });

  it('is the slowest: a little faster turns the order, no slower frame of any direction does', () => {
    fc.assert(
      fc.property(spacelike, unitVector, between(0, 0.999999), ({ dtS, dxM }, unit, part) => {
        fc.pre(Math.abs(dtS) > 1e-12);
        const turning = turningVelocity(dtS, dxM)!;
        const faster = timeDifferenceInFrame(fourVelocity(scale(1.000001, turning.gammaBeta)), dtS, dxM);
        expect(Math.sign(faster)).toBe(-Math.sign(dtS));
        const slower = timeDifferenceInFrame(fourVelocity(scale(part * norm(turning.gammaBeta), unit)), dtS, dxM);
        expect(Math.sign(slower)).toBe(Math.sign(dtS));
      }),
    );
  });
});

describe('aberration and Doppler', () => {
  it('come back when the frame is left again', () => {
    fc.assert(
      fc.property(unitVector, velocity, (n, v) => {
        const seen = aberrate(n, v);
        expect(Math.abs(norm(seen) - 1)).toBeLessThan(ROUNDING);
        expect(norm(subtract(aberrate(seen, oppositeVelocity(v)), n))).toBeLessThan(PROMISED);
        const there = dopplerOfMovingReceiver(v, n);
        expect(Math.abs(there * dopplerOfMovingReceiver(oppositeVelocity(v), seen) - 1)).toBeLessThan(PROMISED);
      }),
    );
  });

  it('are the boost of a light wave', () => {
    fc.assert(
      fc.property(unitVector, velocity, (n, v) => {
        const wave = boostEvent(v, { ctM: 1, xM: opposite(n) });
        expect(Math.abs(wave.ctM - dopplerOfMovingReceiver(v, n))).toBeLessThan(ROUNDING * v.gamma);
        expect(norm(add(wave.xM, scale(wave.ctM, aberrate(n, v))))).toBeLessThan(ROUNDING * v.gamma);
      }),
    );
  });

  it('hold 1e-12 for the angles too, grazing and fast, by the cosine and the angle form', () => {
    fc.assert(
      fc.property(between(0, Math.PI), fastVelocity, (t, v) => {
        const seen = aberratedAngleRad(t, v);
        const w = rapidity(v);
        // 1 + cos and 1 - cos of the seen angle, from Einstein's cosine written with exp(rapidity); no term cancels.
        const behind = Math.exp(2 * w) * Math.cos(t / 2) ** 2;
        const ahead = Math.sin(t / 2) ** 2;
        const cosine = (behind - ahead) / (behind + ahead);
        expect(Math.abs(Math.cos(seen) - cosine)).toBeLessThan(PROMISED);
        expect(Math.abs(unaberratedAngleRad(seen, v) - t)).toBeLessThanOrEqual(PROMISED * Math.max(1, v.gamma * (Math.PI - t > 1 ? 0 : 1)));
        // The ratio of a moving source, its line of sight at the seen angle, is that of the receiver's motion at the old one.
        const ratio = v.gamma + norm(v.gammaBeta) * Math.cos(t);
        expect(Math.abs(dopplerOfMovingSource(v, seen) - ratio)).toBeLessThanOrEqual(PROMISED * v.gamma);
      }),
    );
  });

  it('give the share of photons and of energy as the integrals of the beamed light', () => {
    fc.assert(
      fc.property(velocityOfRapidity(0, 2), between(0.05, 3.1), (v, halfAngle) => {
        // Simpson's rule over the cone: photons are beamed with D^2 per solid angle, their energy with one D more.
        const integral = (power: number, to: number): number => {
          const STEPS = 2_000;
          const at = (k: number): number => {
            const t = (k * to) / STEPS;
            return (dopplerOfMovingSource(v, t) ** power * Math.sin(t)) / 2;
          };
          let sum = at(0) + at(STEPS);
          for (let k = 1; k < STEPS; k += 1) sum += (k % 2 === 1 ? 4 : 2) * at(k);
          return (sum * to) / STEPS / 3;
        };
        const photons = BEAMING_EXPONENT.photonsPerSolidAngle;
        const energy = photons + BEAMING_EXPONENT.photonEnergy;
        const SIMPSON = 1e-8;
        expect(Math.abs(photonShareWithin(v, halfAngle) - integral(photons, halfAngle))).toBeLessThan(SIMPSON);
        const wholeEnergy = integral(energy, Math.PI);
        expect(Math.abs(wholeEnergy / v.gamma - 1)).toBeLessThan(SIMPSON);
        expect(Math.abs(energyShareWithin(v, halfAngle) - integral(energy, halfAngle) / wholeEnergy)).toBeLessThan(SIMPSON);
      }),
      { numRuns: 20 },
    );
  });

  it('squeeze a small bundle of rays by the solid angle that the table of exponents says', () => {
    fc.assert(
      fc.property(between(0.2, 2.9), velocity, (t, v) => {
        const STEP = 1e-4;
        const solid = (from: number, to: number): number => Math.cos(from) - Math.cos(to);
        const seen = solid(aberratedAngleRad(t, v), aberratedAngleRad(t + STEP, v));
        const ratio = v.gamma + norm(v.gammaBeta) * Math.cos(t + STEP / 2);
        const expected = ratio ** BEAMING_EXPONENT.solidAngle * solid(t, t + STEP);
        expect(Math.abs(seen / expected - 1)).toBeLessThan(1e-4);
      }),
    );
    expect(BEAMING_EXPONENT.photonRatePerSolidAngle).toBe(BEAMING_EXPONENT.photonRate - BEAMING_EXPONENT.solidAngle);
    expect(BEAMING_EXPONENT.energyFluxPerSolidAngle).toBe(BEAMING_EXPONENT.photonRatePerSolidAngle + BEAMING_EXPONENT.photonEnergy);
  });
});

describe('directions', () => {
  it('come back from angles and from galactic axes', () => {
    fc.assert(
      fc.property(unitVector, (n) => {
        const angles = anglesOf(n);
        expect(angles.longitudeDeg).toBeGreaterThanOrEqual(0);
        expect(angles.longitudeDeg).toBeLessThan(360);
        expect(norm(subtract(unitFromAngles(angles), n))).toBeLessThan(ROUNDING);
        expect(norm(subtract(galacticToIcrs(icrsToGalactic(n)), n))).toBeLessThan(ROUNDING);
      }),
    );
    expect(anglesOf([1, -1e-20, 0]).longitudeDeg).toBe(0); // 360 - 6e-19 is 360 in doubles
  });

  it('are found again from the delays of a plane wave: on the ring of two sites, one of the two of three sites', () => {
    const stepM = fc.tuple(unitVector, between(1e5, 1e7)).map(([unit, size]) => scale(size, unit));
    fc.assert(
      fc.property(unitVector, stepM, stepM, (n, second, third) => {
        const area = norm(cross(unitOf(second), unitOf(third)));
        fc.pre(area > 0.01);
        const up = unitOf(cross(second, third));
        fc.pre(Math.abs(dot(n, up)) > 0.01);
        const [dtSecond, dtThird] = [planeWaveDelayS(n, second), planeWaveDelayS(n, third)];
        const found = directionsOfThreeSites({ dxM: second, dtS: dtSecond }, { dxM: third, dtS: dtThird });
        if (!found.ok) throw new Error(found.problem.text);
        const SPREAD = 1e-9; // rounding over the least angles between the baselines and off their plane
        const own = found.value[dot(n, up) > 0 ? 0 : 1];
        expect(norm(subtract(own, n))).toBeLessThan(SPREAD);
        const mirrored = subtract(n, scale(2 * dot(n, up), up));
        expect(norm(subtract(found.value[dot(n, up) > 0 ? 1 : 0], mirrored))).toBeLessThan(SPREAD);

        const ring = ringOf(dtSecond, norm(second), 1e-9);
        if (!ring.ok) throw new Error(ring.problem.text);
        const angle = Math.atan2(norm(cross(n, second)), dot(n, second));
        expect(Math.abs(ring.value.halfAngleRad - angle)).toBeLessThan(1e-7);
        // The error against a difference: what a nanosecond of delay does to the angle.
        fc.pre(Math.sin(angle) > 0.1);
        const nudged = ringOf(dtSecond + 1e-9, norm(second));
        if (!nudged.ok) throw new Error(nudged.problem.text);
        expect(ring.value.sigmaRad / Math.abs(nudged.value.halfAngleRad - ring.value.halfAngleRad)).toBeCloseTo(1, 1);
      }),
    );
  });
});
