import { describe, expect, it } from 'vitest';
import { MOST_RECORD_BYTES } from '#schema/words';
import { type SiteRecord } from '#shared/contract/site-record';
import { checkConservation } from '../../backend/ingest/conservation';
import { type SetAsideReason } from '../../backend/ingest/group-notes';
import { count, newIngest, record } from '../support/ingest';
import { smallNetwork } from '../support/small-network';

type Case = readonly [what: string, reason: SetAsideReason, record: Partial<SiteRecord>];

const reading = (reason: SetAsideReason, ...texts: readonly string[]): Case[] =>
  texts.map((text) => [`reading ${JSON.stringify(text)}`, reason, { reading: text }]);
const pair = (text: string): Case => [`pair ${JSON.stringify(text)}`, 'reading-form', { reading: text, readingForm: 'tai-pair' }];
const of = (field: keyof SiteRecord, reason: SetAsideReason, ...texts: readonly string[]): Case[] =>
  texts.map((text) => [`${field} ${JSON.stringify(text).slice(0, 40)}`, reason, { [field]: text }]);

/** Sites A, B, C log in TAI; the run began in 2020. */
const CASES: readonly Case[] = [
  ...of('sequence', 'sequence', '', ' ', '-1', '+1', '1.0', '1e3', '0x1f', '１', '1 ', 'NaN', '1\u0000', '\ud800'),
  ['a sequence of 4,097 digits', 'too-long', { sequence: '9'.repeat(4097) }],
  ...of('series', 'series', ' ', 'a b', 'a:b', 'ä', 'x'.repeat(25), '*', '\n'),
  ...of('kind', 'kind', 'Trigger', 'pulse', ' ', '0', 'trigger '),
  ...reading('reading-empty', ''),
  ...reading(
    'reading-form',
    ' ',
    'now',
    '2026-03-01',
    '2026-03-01T12:00',
    '2026-03-01T12:00:00Z',
    '2026-03-01t12:00:00',
    '2026-03-01  12:00:00',
  ),
  ...reading(
    'reading-form',
    '2026-03-01T12:00:00.',
    '2026-03-01T12:00:00.1234567890123',
    '2026-03-01T12:00:00,5',
    '2026-3-1T12:00:00',
    '+2026-03-01T12:00:00',
  ),
  ...reading('reading-form', '１026-03-01T12:00:00', '2026-03-01T12:00:00+00:00', '2026-03-01T12:00:00\u0000', '1772323237.5'),
  ...reading('date', '2026-02-29T12:00:00', '2026-13-01T12:00:00', '2026-00-01T12:00:00', '2026-03-32T12:00:00'),
  ...reading('time-of-day', '2026-03-01T24:00:00', '2026-03-01T12:60:00', '2026-03-01T12:00:61'),
  ...reading('no-leap-second', '2026-03-01T23:59:60'),
  ...reading('too-long', '2026-03-01T12:00:00.' + '0'.repeat(200)),
  ...reading('outside-run', '0000-01-01T00:00:00', '1969-12-31T23:59:59', '2019-12-31T23:59:59'),
  ...reading('future', '9999-12-31T23:59:59', '2026-03-02T00:05:00'),
  pair(''.padEnd(1)),
  pair('1772323237'),
  pair('1772323237.5 0'),
  pair('1772323237 1000000000000'),
  pair('1772323237 -1'),
  pair('9007199254740993 0'),
  pair('1772323237  0'),
  ...of('sigmaNs', 'sigma', '-1', 'NaN', 'Infinity', '1e999', '20 ns', '1,5', ' ', '0x10', '--1'),
  ['a sigma of 401 digits', 'too-long', { sigmaNs: '1'.repeat(401) }],
  ...of('amplitude', 'amplitude', 'NaN', '-Infinity', '1e999', 'big', '1_000', '1,5'),
  ['an amplitude of 401 digits', 'too-long', { amplitude: '0.'.padEnd(402, '1') }],
  ['a further column named as one that every record has', 'columns', { extra: { reading: '2026-03-01T12:00:00' } }],
  ['a further column named __proto__, and too much in it', 'too-long', { extra: Object.fromEntries([['__proto__', 'x'.repeat(70_000)]]) }],
  ['more than a record may hold', 'too-long', { extra: { note: 'ä'.repeat(40_000) } }],
];

describe('60 kinds of malformed record and more', () => {
  it('are as many', () => expect(CASES.length).toBeGreaterThanOrEqual(60));

  it.each(CASES)('statement 37: %s is set aside as %s, verbatim, counted, and known again', async (_, reason, more) => {
    const at = newIngest(smallNetwork());
    const bad = record(more);
    const [answer, good] = await at.send('A', bad, record({ series: 'good' }));
    expect(answer).toMatchObject({ fate: 'set-aside', reason });
    expect(answer!.detail).not.toBe('');
    expect(good).toEqual({ fate: 'stored' });
    expect((await at.send('A', bad))[0]).toEqual({ fate: 'known' });
    const kept = at.db.$client.prepare<[], { verbatim: string; reason: string }>('SELECT verbatim, reason FROM set_asides').all();
    expect(kept.map((row) => row.reason)).toEqual([reason]);
    const whole = JSON.stringify(bad);
    // What is longer than a record may be is cut, and ends in a mark that says so.
    const isWhole = Buffer.byteLength(whole) <= MOST_RECORD_BYTES;
    expect(kept[0]!.verbatim).toBe(isWhole ? whole : `${whole.slice(0, kept[0]!.verbatim.length - 1)}\u2026`);
    expect(count(at.db, 'SELECT sum(received) - sum(stored) - sum(known) - sum(set_aside) FROM series')).toBe(0);
    expect(count(at.db, 'SELECT sum(received) FROM series')).toBe(3);
    expect(checkConservation(at.db)).toEqual([]);
    expect(at.faults).toEqual([]);
    at.close();
  });

  it('all at once, mixed with good ones, leave each good one stored', async () => {
    const at = newIngest(smallNetwork());
    const records = CASES.flatMap(([, , more], k) => [
      record({ series: `s${k}`, ...more }),
      record({ series: 'good', sequence: String(k) }),
    ]);
    const answers = await at.send('A', ...records);
    expect(answers.filter((_, k) => k % 2 === 1).every(({ fate }) => fate === 'stored')).toBe(true);
    expect(answers.filter((_, k) => k % 2 === 0).every(({ fate }) => fate === 'set-aside')).toBe(true);
    expect(checkConservation(at.db)).toEqual([]);
    at.close();
  });
});
