import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { pairsOfSet } from '#shared/contract/pairs-of-set';
import { type Claim, clockErrorThatUndoes, numbersOf, type NumbersOfSet, proposedClaims, whyNotSupported } from '#shared/review/claims';
import { fourVelocity } from '#shared/relativity/velocity';
import { errorFree, eventColumns } from '../support/events';

// What may be claimed of pairs whose class, turning speed or order in a frame is published or derived; the rows are those of pairs.test.ts, each
// with its source.

interface Row {
  readonly id: string;
  readonly inputs: Readonly<Record<string, unknown>>;
  readonly expected: unknown;
  readonly tolerance: { readonly abs?: number };
  readonly source: string;
  readonly status: string;
}

const rows = JSON.parse(readFileSync(new URL('./checks/pairs.json', import.meta.url), 'utf8')) as readonly Row[];

function check(ids: readonly string[], behaviour: string, body: (row: Row) => void): void {
  for (const id of ids) {
    const row = rows.find((candidate) => candidate.id === id);
    if (row === undefined) throw new Error(`no row ${id}`);
    it(`${id} ${behaviour} (${row.status}; ${row.source})`, () => body(row));
  }
}

const SIGMAS = 3;
const START_TAI_S = 1_772_323_237;
const KINDS = { timelike: 'before-in-every-frame', spacelike: 'no-common-order', undecided: 'undecided', null: 'undecided' } as const;

/** The set of two events so far apart along x, of which the second is later, with the velocity of a frame along x. */
function setOf(dtS: number, dxM: number, sigmaDtS = 0, betaC = 0): NumbersOfSet {
  const laterPs = Math.round(dtS * 1e12) + 5e11;
  const wholeS = Math.floor(laterPs / 1e12);
  const events = eventColumns([
    { taiS: START_TAI_S, ps: 5e11, readingSigmaNs: sigmaDtS * 1e9 },
    { taiS: START_TAI_S + wholeS, ps: laterPs - wholeS * 1e12, placeM: [dxM, 0, 0], site: 1 },
  ]);
  const velocity = fourVelocity([betaC / Math.sqrt(1 - betaC * betaC), 0, 0]);
  const pairs = pairsOfSet({ events, errors: errorFree(2), sigmas: SIGMAS, velocities: [velocity] });
  return { sigmas: SIGMAS, events: [{ name: 'A:1' }, { name: 'B:1' }], frames: [{ code: 'along', gamma: velocity.gamma }], pairs };
}

const claim = (kind: Claim['kind'], a = 1, b = 2, frame: string | null = null): Claim => ({ kind, a, b, frame });

describe('what is proposed of a pair', () => {
  check(['C-SIM-02', 'C-SIM-03', 'C-SIM-04', 'C-SIM-05'], 'is what its class carries, with its turning speed', (row) => {
    const { dt_s, dx_m } = row.inputs as Record<'dt_s' | 'dx_m', number>;
    const { kind, beta } = row.expected as { kind: keyof typeof KINDS; beta: number | null };
    const set = setOf(Math.abs(dt_s), dx_m);
    const [proposed] = proposedClaims(set);
    expect(proposed).toEqual(claim(KINDS[kind]));
    const numbers = numbersOf(set, proposed!);
    if (beta === null) expect(numbers).toMatchObject({ turningSpeedC: null });
    else expect(Math.abs((numbers as { turningSpeedC: number }).turningSpeedC - Math.abs(beta))).toBeLessThan(row.tolerance.abs!);
  });

  check(['D-SN-06'], 'is what the class of an interval between stated limits carries, and no stronger claim is', (row) => {
    const pairs = row.inputs['pairs'] as readonly Record<'dt_s' | 'plus_s' | 'minus_s' | 'distance_m', number>[];
    const kinds = pairs.map(({ dt_s, plus_s, minus_s, distance_m }) => {
      // Limits are taken as three standard errors about their middle; where that is negative the second is the earlier.
      const set = setOf(Math.abs(dt_s + (plus_s - minus_s) / 2), distance_m, (plus_s + minus_s) / 2 / SIGMAS);
      const [proposed] = proposedClaims(set);
      for (const kind of ['before-in-every-frame', 'no-common-order'] as const)
        expect(whyNotSupported(set, claim(kind)) === undefined).toBe(proposed?.kind === kind);
      return proposed?.kind;
    });
    expect(kinds).toEqual((row.expected as readonly (keyof typeof KINDS)[]).map((kind) => KINDS[kind]));
  });
});

describe('a claim of one frame', () => {
  check(['C-SIM-12'], 'is carried the other way round beyond the turning speed', (row) => {
    const { dt_s, dx_m, beta_along_pair } = row.inputs as Record<'dt_s' | 'dx_m' | 'beta_along_pair', number>;
    const set = setOf(dt_s, dx_m, 0, beta_along_pair);
    expect(whyNotSupported(set, claim('before-in-frame'))).toBeUndefined();
    expect(whyNotSupported(set, claim('before-in-frame', 1, 2, 'along'))).toContain('B:1');
    const turned = claim('before-in-frame', 2, 1, 'along');
    expect(whyNotSupported(set, turned)).toBeUndefined();
    const { dtNs } = numbersOf(set, turned) as { dtNs: number };
    expect(Math.abs(-dtNs / 1e6 - (row.expected as { dt_prime_ms: number }).dt_prime_ms)).toBeLessThan(row.tolerance.abs!);
  });
});

describe('the clock error that undoes', () => {
  check(['D-GW15-01'], 'the claim that GW150914 has no common order', (row) => {
    const { dt_ms, dt_plus_ms, baseline_m } = row.inputs as Record<string, number>;
    const set = setOf(dt_ms! / 1e3, baseline_m!, dt_plus_ms! / 1e3 / SIGMAS);
    expect(whyNotSupported(set, claim('no-common-order'))).toBeUndefined();
    expect(whyNotSupported(set, claim('did-not-cause'))).toBeUndefined();
    expect(whyNotSupported(set, claim('did-not-cause', 2, 1))).toBeUndefined();
    // The 10.01 ms that light takes (the source's 10 ms intersite time), less 6.9 ms, less the upper limit of 0.5 ms.
    expect(clockErrorThatUndoes(set, claim('no-common-order'))!.changeNs / 1e6).toBeCloseTo(10.01 - 6.9 - 0.5, 2);
  });
});
