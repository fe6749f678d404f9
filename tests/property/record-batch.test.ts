import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { packRecords, unpackRecords } from '#shared/contract/record-batch';
import { SITE_LIMITS } from '#shared/contract/site-socket';
import { type SiteRecord } from '#shared/contract/site-record';
import { utf8 } from '../../backend/site-client/utf8';

const MUTATIONS = 10_000;
const anyText = fc.oneof(fc.string({ maxLength: 12 }), fc.string({ unit: 'binary', maxLength: 8 }), fc.constantFrom('', '7', '﻿x', '1e5'));
const whole = fc.maxSafeNat().map(String);
const pairText = fc.tuple(fc.maxSafeInteger(), fc.integer({ min: 0, max: 999_999_999_999 })).map(([taiS, ps]) => `${taiS} ${ps}`);
const name = anyText.filter((text) => text !== '' && text !== '__proto__' && utf8.encode(text).length <= SITE_LIMITS.columnNameBytes);
const extra = fc
  .dictionary(
    name,
    anyText.filter((text) => text !== ''),
    { maxKeys: 4, minKeys: 1 },
  )
  .map((columns) => Object.fromEntries(Object.entries(columns)));
const record = fc
  .record(
    {
      series: anyText,
      sequence: fc.oneof(whole, anyText),
      kind: fc.constantFrom('', 'trigger', 'reference'),
      reading: fc.oneof(pairText, anyText),
      readingForm: fc.constantFrom('iso', 'tai-pair'),
      sigmaNs: fc.oneof(whole, anyText),
      amplitude: anyText,
      extra,
    },
    { requiredKeys: ['series', 'sequence', 'kind', 'reading', 'readingForm', 'sigmaNs', 'amplitude'] },
  )
  .map((made): SiteRecord => made as SiteRecord);
const batch = fc.oneof(
  fc.array(record, { minLength: 1, maxLength: 20 }),
  // What a site really sends: numbers that count up, times as pairs, all else the same.
  fc
    .tuple(record, fc.array(fc.tuple(whole, pairText), { minLength: 1, maxLength: 50 }))
    .map(([like, rows]) => rows.map(([sequence, reading]): SiteRecord => ({ ...like, sequence, reading, readingForm: 'tai-pair' }))),
);

const packed = (records: readonly SiteRecord[]): Uint8Array => {
  const found = packRecords(records, utf8);
  if (!found.ok) throw new Error(found.problem.text);
  return found.value;
};
const plain = (over: Partial<SiteRecord> = {}): SiteRecord => ({
  series: '',
  sequence: '17',
  kind: '',
  reading: '2026-03-01T12:00:00',
  readingForm: 'iso',
  sigmaNs: '',
  amplitude: '',
  ...over,
});

/** The bytes within a larger buffer, at an odd place, as attachments arrive. */
function unaligned(bytes: Uint8Array): Uint8Array {
  const around = new Uint8Array(bytes.length + 7);
  around.set(bytes, 3);
  return around.subarray(3, 3 + bytes.length);
}

describe('a batch of records', () => {
  it('comes back as it was, from any place of a buffer', () => {
    fc.assert(
      fc.property(batch, (records) => {
        const back = unpackRecords(unaligned(packed(records)), utf8);
        expect(back.ok && back.value).toEqual(records);
      }),
    );
  });

  it('whatever its bytes are, is read or is a problem, and never throws', () => {
    let read = 0;
    fc.assert(
      fc.property(
        batch,
        fc.array(fc.tuple(fc.nat(), fc.integer({ min: 0, max: 255 })), { minLength: 1, maxLength: 6 }),
        fc.option(fc.nat(), { nil: undefined }),
        (records, changes, cut) => {
          const bytes = packed(records);
          for (const [at, value] of changes) bytes[at % bytes.length] = value;
          const found = unpackRecords(cut === undefined ? bytes : bytes.subarray(0, cut % (bytes.length + 1)), utf8);
          if (found.ok) {
            read++;
            expect(found.value.length).toBeLessThanOrEqual(SITE_LIMITS.batchRecords);
          } else expect(found.problem.code).toBe('batch-form');
        },
      ),
      { numRuns: MUTATIONS },
    );
    expect(read, 'some mutations only change a text').toBeGreaterThan(0);
  });

  it('of random bytes is a problem', () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 200 }), (bytes) => {
        expect(unpackRecords(bytes, utf8).ok).toBe(false);
      }),
    );
  });

  it('takes 16 bytes a record for a time of two numbers, and 8 for a number that counts up', () => {
    const rows = Array.from({ length: 1000 }, (_, n) =>
      plain({ sequence: String(n), reading: `1772323237 ${n}`, readingForm: 'tai-pair' }),
    );
    expect(packed(rows).length).toBe(16 + 6 + 1000 * 24 + 3 + 'tai-pair'.length);
  });

  it.each<[string, SiteRecord[], string]>([
    ['no record', [], 'batch-records'],
    ['1,001 records', Array.from({ length: 1001 }, () => plain()), 'batch-records'],
    ['a text of 65,536 bytes', [plain({ reading: 'x'.repeat(65_536) })], 'record-text'],
    ['texts beyond 256 KiB', Array.from({ length: 5 }, (_, n) => plain({ reading: String(n).repeat(65_000) })), 'batch-bytes'],
    ['a column __proto__', [plain({ extra: Object.fromEntries([['__proto__', 'x']]) })], 'record-columns'],
    ['a column without a name', [plain({ extra: { '': 'x' } })], 'record-columns'],
    ['65 further columns', [plain({ extra: Object.fromEntries(Array.from({ length: 65 }, (_, n) => [`c${n}`, 'x'])) })], 'record-columns'],
  ])('of %s is not packed', (_what, records, code) => {
    const found = packRecords(records, utf8);
    expect(!found.ok && found.problem.code).toBe(code);
  });

  it('keeps a longest text', () => {
    const records = [plain({ reading: 'x'.repeat(65_535) })];
    const back = unpackRecords(packed(records), utf8);
    expect(back.ok && back.value).toEqual(records);
  });

  it('that gives a thousand records one text of 64 KiB is a problem, packed or not: little may not become much', () => {
    const alike = (count: number): SiteRecord[] => Array.from({ length: count }, () => plain({ amplitude: 'x'.repeat(65_535) }));
    const bytes = packed(alike(15));
    expect(unpackRecords(bytes, utf8).ok).toBe(true);
    new DataView(bytes.buffer).setUint32(8, 1000, true);
    expect(unpackRecords(bytes, utf8)).toMatchObject({ ok: false, problem: { code: 'batch-form' } });
    expect(packRecords(alike(16), utf8)).toMatchObject({ ok: false, problem: { code: 'batch-bytes' } });
  });

  it.each<[string, (bytes: Uint8Array) => Uint8Array, string]>([
    ['nothing', () => new Uint8Array(), 'has 0 bytes'],
    ['more than 256 KiB', () => new Uint8Array(256 * 1024 + 1), 'has 262145 bytes'],
    ['other letters', (bytes) => bytes.with(0, 0), 'SKRB'],
    ['another version', (bytes) => bytes.with(4, 9), 'version 9'],
    ['4 billion records', (bytes) => bytes.with(11, 255), 'records'],
    ['too many columns', (bytes) => bytes.with(7, 255), 'further columns'],
    ['a byte too many', (bytes) => Uint8Array.from([...bytes, 0]), 'behind its columns'],
    ['its end cut off', (bytes) => bytes.subarray(0, 20), 'ends within its columns'],
    ['bytes that are not UTF-8', (bytes) => bytes.with(bytes.length - 1, 0xff), 'not UTF-8'],
  ])('of %s says so', (_what, spoil, said) => {
    const found = unpackRecords(spoil(packed([plain()])), utf8);
    expect(found.ok ? '' : found.problem.text).toContain(said);
  });
});
