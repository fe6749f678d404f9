import { describe, expect, it } from 'vitest';
import { C_M_S } from '../constants';
import { type Outcome } from '../outcome';
import { addPicoseconds, type Instant, instantOf } from '../time/instant';
import { timeDifferenceInFrame } from './boost';
import { compose, GEOCENTRIC } from './frame';
import { type FrameDefinition, type FrameMotion, orderFrames } from './frame-definition';
import { type FrameContext, resolveFrames } from './frame-resolver';
import { type Vec3 } from './vector';
import { betaC, fourVelocity, oppositeVelocity, speedC } from './velocity';

const ORIGIN = instantOf(1_000, 0);
const LATER = instantOf(1_000 + 21_600, 0);

/** Two sites that go round in a day, a third that stands where the first does, and an Earth whose velocity turns likewise. */
const turn = (instant: Instant): number => ((instant.taiS - ORIGIN.taiS) / 86_400) * 2 * Math.PI;
function context(asked: string[] = []): FrameContext {
  return {
    originInstant: ORIGIN,
    siteCodes: new Set(['ORL', 'VES', 'TWIN']),
    placeAt: (site, instant) => {
      asked.push(`${site} ${instant.taiS}`);
      const angle = turn(instant) + (site === 'VES' ? Math.PI : 0);
      return [6e6 * Math.cos(angle), 6e6 * Math.sin(angle), 1e6];
    },
    earthBarycentricVelocityMS: (instant) => [30_000 * Math.cos(turn(instant)), 30_000 * Math.sin(turn(instant)), 0],
  };
}

const SPEED = { gamma: 1.25, gammaBeta: 0.75 };
const MOVING: FrameMotion = { kind: 'velocity', velocity: fourVelocity([0.75, 0, 0]) };
const BASELINE: FrameMotion = { kind: 'toward-baseline', speed: SPEED, from: 'ORL', to: 'VES' };
const frame = (code: string, motion: FrameMotion, more: Partial<FrameDefinition> = {}): FrameDefinition => ({
  code,
  name: '',
  parent: 'geocentric',
  at: 'event',
  motion,
  ...more,
});

function good<T>(outcome: Outcome<T>): T {
  if (!outcome.ok) throw new Error(`${outcome.problem.where}: ${outcome.problem.text}`);
  return outcome.value;
}
const close = (actual: Vec3, expected: Vec3) => {
  for (const k of [0, 1, 2] as const) expect(actual[k]).toBeCloseTo(expected[k], 12);
};

describe('resolveFrames', () => {
  it('refuses what does not hang together, naming the field', () => {
    const faults: readonly (readonly [readonly FrameDefinition[], string, string])[] = [
      [[frame('a', MOVING), frame('b', MOVING, { parent: 'c' })], 'frames[1].parent', 'no frame c'],
      [[frame('a', MOVING), frame('b', MOVING), frame('a', MOVING)], 'frames[2].code', 'twice'],
      [[frame('geocentric', MOVING)], 'frames[0].code', 'geocentric'],
      [[frame('x', MOVING), frame('a', MOVING, { parent: 'a' })], 'frames[1].parent', 'a > a'],
      [
        [frame('tail', MOVING, { parent: 'b' }), frame('b', MOVING, { parent: 'c' }), frame('c', MOVING, { parent: 'b' })],
        'frames[1].parent',
        'b > c > b',
      ],
      [
        [
          frame('a', MOVING, { parent: 'b' }),
          frame('b', MOVING, { parent: 'c' }),
          frame('c', MOVING, { parent: 'd' }),
          frame('d', MOVING, { parent: 'a' }),
        ],
        'frames[0].parent',
        'a > b > c > d > a',
      ],
      [[frame('a', MOVING), frame('bary', { kind: 'barycentric' }, { parent: 'a' })], 'frames[1].parent', 'geocentric'],
      [[frame('a', MOVING), frame('b', BASELINE, { parent: 'a' })], 'frames[1].parent', 'geocentric'],
      [[frame('a', { ...BASELINE, from: 'NOX' })], 'frames[0].velocity.toward.baseline[0]', 'no site NOX'],
      [[frame('a', { ...BASELINE, to: 'NOX' })], 'frames[0].velocity.toward.baseline[1]', 'no site NOX'],
      [[frame('a', { ...BASELINE, to: 'ORL' })], 'frames[0].velocity.toward.baseline[1]', 'both ends'],
      [[frame('b', MOVING), frame('a', { ...BASELINE, to: 'TWIN' })], 'frames[1].velocity.toward.baseline', 'one place'],
    ];
    for (const [definitions, where, text] of faults) {
      const outcome = resolveFrames(definitions, context());
      if (outcome.ok) throw new Error(`accepted ${where}`);
      expect(outcome.problem.where).toBe(where);
      expect(outcome.problem.text).toContain(text);
    }
  });

  it('refuses a chain whose gamma would leave the doubles, and takes one just below', () => {
    const fast = fourVelocity([Math.sinh(149), 0, 0]);
    const chain = (links: number) =>
      Array.from({ length: links }, (_, k) =>
        frame(`f${k}`, { kind: 'velocity', velocity: fast }, { parent: k === 0 ? 'geocentric' : `f${k - 1}` }),
      );
    expect(resolveFrames(chain(3), context())).toMatchObject({ ok: false, problem: { code: 'frame-speed', where: 'frames[2].velocity' } });
    const velocity = good(good(resolveFrames(chain(2), context())).velocityAt('f1', ORIGIN));
    expect(Math.asinh(velocity.gammaBeta[0])).toBeCloseTo(298, 10);
    expect(speedC(velocity)).toBeLessThan(1);
  });

  it('has only the geocentric frame without definitions, and says which frames there are', () => {
    const frames = good(resolveFrames([], context()));
    expect(frames.codes).toEqual(['geocentric']);
    expect(good(frames.frameAt('geocentric', LATER))).toBe(GEOCENTRIC);
    expect(frames.isConstant('geocentric')).toBe(true);
    expect(frames.isConstant('cmb')).toBe(false);
    expect(frames.velocityAt('cmb', LATER)).toMatchObject({ ok: false, problem: { code: 'frame-unknown' } });
    expect(frames.frameAt('cmb', LATER)).toMatchObject({ ok: false, problem: { code: 'frame-unknown' } });
  });

  it('moves the barycentric frame at minus the velocity of the Earth at the event', () => {
    const frames = good(resolveFrames([frame('bary', { kind: 'barycentric' })], context()));
    close(betaC(good(frames.velocityAt('bary', ORIGIN))), [-30_000 / C_M_S, 0, 0]);
    close(betaC(good(frames.velocityAt('bary', LATER))), [0, -30_000 / C_M_S, 0]);
    close(betaC(good(frames.velocityAt('bary', ORIGIN))), [-30_000 / C_M_S, 0, 0]);
    expect(frames.isConstant('bary')).toBe(false);
  });

  it('takes a baseline from the first site to the second as it lies at the event, or at the origin when told so', () => {
    const frames = good(resolveFrames([frame('now', BASELINE), frame('then', BASELINE, { at: 'origin' })], context()));
    close(betaC(good(frames.velocityAt('now', ORIGIN))), [-0.6, 0, 0]);
    close(betaC(good(frames.velocityAt('now', LATER))), [0, -0.6, 0]);
    close(betaC(good(frames.velocityAt('then', LATER))), [-0.6, 0, 0]);
    expect([frames.isConstant('now'), frames.isConstant('then')]).toEqual([false, true]);
  });

  it('takes each link of a chain by its own at, whatever the order of the definitions', () => {
    const child = frame('child', MOVING, { parent: 'link' });
    for (const at of ['event', 'origin'] as const) {
      const definitions = [child, frame('link', BASELINE, { at })];
      const frames = good(resolveFrames(definitions, context()));
      expect(frames.codes).toEqual(['geocentric', 'child', 'link']);
      expect(frames.isConstant('child')).toBe(at === 'origin');
      const link = good(frames.frameAt('link', at === 'event' ? LATER : ORIGIN));
      const expected = compose(link, fourVelocity([0.75, 0, 0]));
      const found = good(frames.frameAt('child', LATER));
      close(found.velocity.gammaBeta, expected.velocity.gammaBeta);
      expect(found.velocity).toEqual(good(frames.velocityAt('child', LATER)));
      expect(found.wigner.angleRad).toBeCloseTo(expected.wigner.angleRad, 14);
      expect(found.wigner.angleRad > 0.1).toBe(at === 'event'); // at the origin the two links are on one line
    }
  });

  it('computes a constant chain once, and a changing one once for an instant', () => {
    const asked: string[] = [];
    const definitions = [frame('then', BASELINE, { at: 'origin' }), frame('now', BASELINE), frame('child', MOVING, { parent: 'now' })];
    const frames = good(resolveFrames(definitions, context(asked)));
    good(frames.velocityAt('then', LATER));
    asked.length = 0;
    expect(frames.velocityAt('then', LATER)).toBe(frames.velocityAt('then', addPicoseconds(LATER, 1)));
    expect(asked).toEqual([]);
    for (const code of ['now', 'child', 'now', 'child']) good(frames.velocityAt(code, LATER));
    expect(asked).toEqual([`VES ${LATER.taiS}`, `ORL ${LATER.taiS}`]);
  });

  it('turns a pair along a baseline at the speed c dt / d of a frame along that baseline', () => {
    const frames = good(resolveFrames([frame('now', BASELINE)], context()));
    const velocity = good(frames.velocityAt('now', LATER));
    const dxM: Vec3 = [0, -12e6, 0];
    expect(Math.abs(timeDifferenceInFrame(velocity, (0.6 * 12e6) / C_M_S, dxM))).toBeLessThan(1e-16);
    close(betaC(oppositeVelocity(velocity)), [0, 0.6, 0]);
  });
});

describe('orderFrames', () => {
  it('puts parents before their children and changes nothing else', () => {
    const [c, b, a] = [frame('c', MOVING, { parent: 'b' }), frame('b', MOVING, { parent: 'a' }), frame('a', MOVING)];
    expect(good(orderFrames([c, b, a], new Set()))).toEqual([a, b, c]);
  });
});
