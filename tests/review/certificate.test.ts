import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import fc from 'fast-check';
import * as z from 'zod';
import { describe, expect, it } from 'vitest';
import { type Certificate, certificate } from '#shared/contract/certificate';
import { type Finding, verifyCertificate } from '#shared/contract/verify-certificate';
import { canonicalJson } from '#shared/review/canonical';
import { earthBarycentricVelocityMS } from '../../backend/frames/ephemeris';
import { root } from '../../scripts/lib.mjs';
import { certificateOf, resealed, sha256 } from '../support/certificates';
import { skewline } from '../support/command';
import { newFolder } from '../support/folder';
import { randomInputs } from '../support/random-inputs';

const checker = { sha256, earthVelocity: earthBarycentricVelocityMS, program: '0.1.0' };

/** What was found; of what is no certificate at all, why. */
function findingsOf(text: string): readonly Finding[] {
  const findings = verifyCertificate(text, checker);
  return findings.ok ? findings.value : [{ holds: false, ...findings.problem }];
}

/** Places that do not hold, as one text. */
const faultsOf = (given: unknown): string =>
  findingsOf(typeof given === 'string' ? given : canonicalJson(given))
    .filter(({ holds }) => !holds)
    .map(({ where, text }) => `${where}: ${text}`)
    .join('\n');

/** Inputs with three events or more and a claim of each kind that is proposed. */
function sample(): Certificate {
  for (const inputs of fc.sample(randomInputs, { numRuns: 200, seed: 7 })) {
    const made = certificateOf(inputs);
    const classes = new Set(made.snapshot.results.pairs.map((pair) => pair.class));
    if (inputs.records.length === 3 && classes.size > 1 && inputs.orientation !== null && inputs.network.frames?.length === 2) return made;
  }
  throw new Error('no sample has two classes');
}
const SAMPLE = sample();

describe('a certificate', () => {
  it('holds as it was made, with whatever white space', () => {
    fc.assert(
      fc.property(randomInputs, fc.constantFrom(0, 1, 2), (inputs, indent) => {
        const made: unknown = JSON.parse(canonicalJson(certificateOf(inputs)));
        expect(faultsOf(JSON.stringify(made, null, indent))).toBe('');
      }),
      { numRuns: 30 },
    );
  });

  it('says what was looked at', () => {
    const lines = findingsOf(canonicalJson(SAMPLE)).map(({ where, text }) => `${where}: ${text}`);
    expect(lines).toEqual([
      'text: keys stand in their order and once each, numbers without a digit too many',
      `snapshot: is what its SHA-256 says: ${SAMPLE.sha256}`,
      `signatures: is what its SHA-256 says: ${SAMPLE.signaturesSha256}`,
      'signatures[0]: Vera Novak: dispute on this snapshot, 2026-03-02T10:01:00.000Z, superseded since',
      'signatures[1]: Ilya Brandt: confirm on this snapshot, 2026-03-02T10:02:00.000Z, withdrawn 2026-03-02T10:05:00.000Z',
      'signatures[2]: Vera Novak: confirm on this snapshot, 2026-03-02T10:06:00.000Z',
      'snapshot.results: every number of 3 events, 3 frames and 3 pairs comes out again from 3 readings, to the last digit',
      `snapshot.claims: ${SAMPLE.snapshot.claims.length} with their numbers; none says more than these carry`,
    ]);
  });
});

type Path = readonly (string | number)[];
const isObject = (value: unknown): value is Record<string, unknown> => typeof value === 'object' && value !== null;

/** The paths of all leaves. */
function leavesOf(value: unknown, path: Path = []): Path[] {
  if (!isObject(value)) return [path];
  return Object.entries(value).flatMap(([key, part]) => leavesOf(part, [...path, Array.isArray(value) ? Number(key) : key]));
}

/** The value with what `change` makes of the one at a path. */
function changedAt(value: unknown, [key, ...rest]: Path, change: (part: unknown) => unknown): unknown {
  if (key === undefined) return change(value);
  if (Array.isArray(value)) return value.map((part: unknown, at) => (at === key ? changedAt(part, rest, change) : part));
  if (!isObject(value)) throw new Error('no such path');
  return Object.fromEntries(Object.entries(value).map(([name, part]) => [name, name === key ? changedAt(part, rest, change) : part]));
}

const pathText = (path: Path): string =>
  path.map((part, at) => (typeof part === 'number' ? `[${part}]` : `${at === 0 ? '' : '.'}${part}`)).join('');

/** One of the digits or letters of a leaf altered: the last digit of a number, the last character of a text. */
function altered(leaf: unknown): unknown {
  if (leaf === null) return 1;
  if (typeof leaf === 'boolean') return !leaf;
  if (typeof leaf === 'string') return leaf === '' ? '0' : `${leaf.slice(0, -1)}${leaf.endsWith('7') ? '3' : '7'}`;
  if (typeof leaf !== 'number') throw new Error('is no leaf');
  const [digits = '', power = ''] = String(leaf).split(/(?=e)/);
  const other = Number(`${digits.slice(0, -1)}${(Number(digits.at(-1)) + 1) % 10}${power}`);
  return other === leaf ? leaf + 1 : other;
}

/** What names a leaf that was altered: its own path where it is checked by itself, else the hash of what it is a part of. */
function nameOf(path: Path): RegExp {
  const [top, part, at] = path;
  if (top === 'signatures') return new RegExp(`^signatures\\[${String(part)}\\]`, 'm');
  if (top !== 'snapshot') return new RegExp(`^(?:snapshot|signatures|${String(top)})\\b`, 'm');
  const own = pathText(path).replaceAll(/[.[\]]/g, '\\$&');
  if (part === 'results') return new RegExp(`^${own}`, 'm');
  if (part === 'claims') return new RegExp(`^snapshot\\.claims\\[${String(at)}\\]|^snapshot: has the SHA-256`, 'm');
  return new RegExp(`^snapshot: has the SHA-256|^snapshot\\.inputs|^${own}`, 'm');
}

describe('what was altered is found and named', () => {
  const leaves = leavesOf(SAMPLE);

  it('in every leaf: a digit of a number, a letter of a text', () => {
    expect(leaves.length).toBeGreaterThan(250);
    for (const path of leaves) expect(faultsOf(changedAt(SAMPLE, path, altered)), pathText(path)).toMatch(nameOf(path));
  });

  it('in every number of the results and of the claims, although all hashes were made anew', () => {
    const numbers = leaves.filter(
      ([top, part, , key]) => top === 'snapshot' && (part === 'results' || (part === 'claims' && key === 'numbers')),
    );
    expect(numbers.length).toBeGreaterThan(150);
    for (const path of numbers) {
      const sealed = resealed(changedAt(SAMPLE, path, altered) as Certificate);
      // The words of a claim's numbers say by which of two forms they are read.
      const named = path.at(-1) === 'class' && path[1] === 'claims' ? path.slice(0, -1) : path;
      expect(faultsOf(sealed), pathText(path)).toContain(pathText(named));
    }
  });

  it('in a claim that says more than the numbers carry, although all hashes were made anew', () => {
    const at = SAMPLE.snapshot.claims.findIndex(({ kind }) => kind === 'no-common-order');
    const sealed = resealed(changedAt(SAMPLE, ['snapshot', 'claims', at, 'kind'], () => 'before-in-every-frame') as Certificate);
    expect(faultsOf(sealed)).toContain(`snapshot.claims[${at}]: says more than the numbers carry: of `);
  });

  it('in a reading, although all hashes were made anew: the numbers do not follow from it', () => {
    const path = ['snapshot', 'inputs', 'records', 0, 'reading'];
    const sealed = resealed(changedAt(SAMPLE, path, (reading) => String(reading).replace('12:00:0', '12:00:1')) as Certificate);
    expect(faultsOf(sealed)).toMatch(/^snapshot\.results\.events\[\d\]/m);
  });

  it('in every key: another name, or none', () => {
    const keys = [...new Set(leaves.flatMap((path) => path.map((_, at) => JSON.stringify(path.slice(0, at + 1)))))]
      .map((text) => JSON.parse(text) as Path)
      .filter((path) => typeof path.at(-1) === 'string');
    for (const path of keys) {
      const above = path.slice(0, -1);
      const key = String(path.at(-1));
      const renamed = changedAt(SAMPLE, above, (part) =>
        Object.fromEntries(Object.entries(part as object).map(([name, value]) => [name === key ? `${name}x` : name, value])),
      );
      expect(faultsOf(renamed), pathText(path)).not.toBe('');
      const left = changedAt(SAMPLE, above, (part) => Object.fromEntries(Object.entries(part as object).filter(([name]) => name !== key)));
      expect(faultsOf(left), pathText(path)).not.toBe('');
    }
  });

  it('in the order of any two of a list, and of any two keys', () => {
    const lists = ['snapshot.results.events', 'snapshot.results.pairs', 'snapshot.inputs.records', 'signatures', 'snapshot.claims'];
    for (const list of lists) {
      const turned = changedAt(SAMPLE, list.split('.'), (part) => [...(part as unknown[])].reverse());
      expect(faultsOf(turned), list).toContain(list.replace(/^snapshot\.(?:inputs|claims).*/, 'snapshot'));
    }
    const text = canonicalJson(SAMPLE);
    expect(faultsOf(text.replace('"number":7,"title"', '"title"').replace('"A short burst"', '"A short burst","number":7'))).toContain(
      'text: stands as',
    );
    expect(faultsOf(text.replace('"format":"skewline-certificate",', '').replace(/\}$/, ',"format":"skewline-certificate"}'))).toContain(
      'text: stands as',
    );
    expect(faultsOf(text.replace('"title":', '"title":"Another","title":'))).toContain('text: stands as');
  });

  it('in the signatures: one taken out, put in twice, moved, or one that stands for another', () => {
    const { signatures } = SAMPLE;
    const [first, second, third] = signatures;
    const faults = (others: readonly unknown[], isSealed = true): string => {
      const list = { ...SAMPLE, signatures: others } as Certificate;
      return faultsOf(isSealed ? { ...list, signaturesSha256: sha256(canonicalJson(others)) } : list);
    };
    expect(faults([second, third])).toContain('signatures[0]: names ');
    expect(faults([first, third])).toContain('signatures[1]: names ');
    expect(faults([first, second])).toContain('signatures[0]: is said to be superseded by');
    expect(faults([first, second], false)).toContain('signatures: has the SHA-256');
    expect(faults([first, second, third, third])).toContain('signatures[3]: names ');
    expect(faults([second, first, third])).toContain('signatures[0]: names ');
    expect(faults([first, { ...second, withdrawnAt: null }, third], false)).toContain('signatures: has the SHA-256');
    expect(faults([{ ...first, supersededBy: second?.sha256 }, second, third])).toContain('no later one of its signer');
  });

  it('in a signature that decides on a claim which is not there', () => {
    const sealed = resealed(changedAt(SAMPLE, ['signatures', 2, 'claims', 0, 'claim'], () => 99) as Certificate);
    expect(faultsOf(sealed)).toContain('signatures[2]: decides on claim 99');
  });

  it('with the version that computed it, where it is another', () => {
    const sealed = resealed(
      changedAt(
        changedAt(SAMPLE, ['snapshot', 'program'], () => '9.9.9'),
        ['snapshot', 'results', 'pairs', 0, 'dtNs'],
        altered,
      ) as Certificate,
    );
    expect(faultsOf(sealed)).toContain('snapshot.program: is 9.9.9, and 0.1.0 computed again');
  });
});

describe('skewline verify', () => {
  const folder = newFolder('verify');
  const write = (name: string, text: string): string => {
    writeFileSync(join(folder, name), text);
    return name;
  };

  it('prints what agrees, and ends with 0', async () => {
    const { code, stdout, stderr } = await skewline(
      ['verify', write('good.json', JSON.stringify(JSON.parse(canonicalJson(SAMPLE)), null, 2))],
      folder,
    );
    expect([code, stderr]).toEqual([0, '']);
    expect(stdout).toMatch(/^agrees {2}text: [^]*agrees {2}snapshot\.results: every number of 3 events[^]*\nthe certificate holds\n$/);
  });

  it('prints what does not, and ends with 1', async () => {
    const path = ['snapshot', 'results', 'pairs', 1, 'distanceM'];
    const { code, stdout, stderr } = await skewline(['verify', write('bad.json', canonicalJson(changedAt(SAMPLE, path, altered)))], folder);
    expect(code).toBe(1);
    expect(stdout).toContain('DIFFERS  snapshot: has the SHA-256 ');
    expect(stdout).toContain(
      `DIFFERS  snapshot.results.pairs[1].distanceM: is stated as ${String(altered(SAMPLE.snapshot.results.pairs[1]?.distanceM))}`,
    );
    expect(stderr).toBe('skewline: bad.json: the certificate does not hold, in 2 places\n');
  });

  it.each([
    ['gone.json', undefined, 'cannot be read'],
    ['text.json', 'no certificate', 'is not JSON'],
    ['deep.json', '['.repeat(1_000_000), 'is not JSON'],
    ['list.json', '[]', 'format: is missing; a certificate has "skewline-certificate"'],
    ['other.json', '{"format":"other"}', 'format: is "other"'],
    ['newer.json', '{"format":"skewline-certificate","version":2}', 'version: is 2; this program reads version 1'],
  ])('ends with 2 for what is no certificate: %s', async (name, text, why) => {
    if (text !== undefined) write(name, text);
    const { code, stdout, stderr } = await skewline(['verify', name], folder);
    expect([code, stdout]).toEqual([2, '']);
    expect(stderr).toContain(why);
    expect(stderr.trimEnd()).not.toContain('\n');
  });
});

describe('static/certificate.schema.json', () => {
  it('is the JSON Schema of what the program reads', async () => {
    const schema = z.toJSONSchema(certificate, { unrepresentable: 'any', override: described });
    const text = `${JSON.stringify({ $id: 'certificate.schema.json', title: 'Skewline certificate, version 1', ...schema }, null, 2)}\n`;
    expect(text).toContain('64 lower-case hex digits');
    await expect(text).toMatchFileSnapshot(join(root, 'static/certificate.schema.json'));
  });
});

/** What a leaf must be, in the words in which the program says so. */
function described({ zodSchema, jsonSchema }: { zodSchema: z.core.$ZodTypes; jsonSchema: z.core.JSONSchema.BaseSchema }): void {
  const { def } = zodSchema._zod;
  if (def.type === 'custom' && typeof def.error === 'function') {
    const words = def.error({ code: 'custom', input: undefined, path: [] } as never);
    if (typeof words === 'string') jsonSchema.description = words;
  }
}
