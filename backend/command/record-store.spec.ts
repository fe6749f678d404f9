import { describe, expect, it } from 'vitest';
import { emptyRecord, type ReconciledRecord, SET_ASIDE_REASONS } from '#shared/reconcile/record';
import { type FoundRecords, RecordStore } from './record-store';

/** One record as a line: its identity, what it holds, or why it is at fault by itself. */
interface Line extends Partial<ReconciledRecord> {
  readonly content?: number;
  readonly fault?: 'sigma' | 'columns';
  readonly file?: number;
}

const MANY = 20_000;

const place = (line: number) => ({ line, offsetBytes: 100 * line, lengthBytes: 10 + line });

/** A store of two sites that has taken the lines in the given order, each with its place in the list as its line in the file. */
function found(lines: readonly Line[], order = lines.map((_, at) => at)): FoundRecords {
  const store = new RecordStore(2);
  for (const at of order) {
    const { content = 0, fault, file = 0, ...fields } = lines[at] ?? {};
    const record = { ...emptyRecord(), ...fields };
    if (fault) store.setAside(fault, record.site, file, place(at));
    else store.put(record, { first: content, second: 1 }, file, place(at));
  }
  return store.finish();
}

const linesOf = ({ accepted, rows }: FoundRecords): number[] => Array.from(rows, (row) => accepted.line[row]!).sort((a, b) => a - b);

/** `line: reason`, sorted. */
const asideOf = ({ setAside, setAsideCount }: FoundRecords): string[] =>
  Array.from({ length: setAsideCount }, (_, at) => `${setAside.line[at]!}: ${SET_ASIDE_REASONS[setAside.reason[at]!]!}`).sort();

describe('a store of records', () => {
  it('keeps what an event needs', () => {
    const { accepted, rows, series } = found([
      {
        site: 1,
        series: 'b',
        sequence: '17',
        kind: 2,
        taiS: 1e9,
        ps: 123_456_789_012,
        readingSigmaNs: 20.5,
        sigmaSource: 1,
        segment: 3,
        sinceEpochDays: -0.25,
        amplitude: 4.5,
        file: 7,
      },
    ]);
    expect(Array.from(rows)).toEqual([0]);
    const cells = Object.fromEntries(Object.entries(accepted).map(([name, column]) => [name, column[0]]));
    expect(cells).toMatchObject({
      site: 1,
      sequence: 17,
      taiS: 1e9,
      ps: 123_456_789_012,
      readingSigmaNs: 20.5,
      segment: 3,
      sinceEpochDays: -0.25,
      amplitude: 4.5,
      file: 7,
      line: 0,
      flags: 2 + 4 * 1,
    });
    expect(series[cells['series']!]).toBe('b');
  });

  it('counts the same identity with the same content once', () => {
    const same = found([{ sequence: '1' }, { sequence: '1' }, { sequence: '1' }, { sequence: '2' }]);
    expect(same.rows).toHaveLength(2);
    expect(same.setAsideCount).toBe(0);
    expect(Array.from(same.counts.repeated)).toEqual([2, 0, 0]);
    expect(Array.from(same.counts.lines)).toEqual([4, 0, 0]);
  });

  it.each([[[0, 1, 2, 3, 4]], [[4, 3, 2, 1, 0]], [[1, 0, 3, 2, 4]]])(
    'sets all of an identity aside when one has another content, whatever comes first: %j',
    (order) => {
      const lines = [
        { sequence: '1', content: 5 },
        { sequence: '1', content: 5 },
        { sequence: '1', content: 6 },
        { sequence: '2', content: 5 },
        { sequence: '2', content: 5 },
      ];
      const store = found(lines, order);
      expect(asideOf(store)).toEqual(['0: conflict', '1: conflict', '2: conflict']);
      expect(store.rows).toHaveLength(1);
      expect(Array.from(store.counts.repeated)).toEqual([1, 0, 0]);
      expect(store.counts.setAside[0]![SET_ASIDE_REASONS.indexOf('conflict')]).toBe(3);
    },
  );

  it('takes contents as different when either half of their hash differs', () => {
    const store = new RecordStore(1);
    const record = { ...emptyRecord(), sequence: '1' };
    store.put(record, { first: 1, second: 1 }, 0, place(1));
    store.put(record, { first: 1, second: 2 }, 0, place(2));
    expect(asideOf(store.finish())).toEqual(['1: conflict', '2: conflict']);
  });

  it('tells identities apart by site, by series and by sequence', () => {
    const store = found([
      { sequence: '1' },
      { sequence: '2' },
      { sequence: '1', site: 1 },
      { sequence: '1', series: 'b' },
      { sequence: '1', series: 'c' },
      { sequence: '9007199254740992' },
      { sequence: '9007199254740993' },
    ]);
    expect(linesOf(store)).toEqual([0, 1, 2, 3, 4, 5, 6]);
  });

  it('does not compare with what is at fault by itself', () => {
    const store = found([
      { sequence: '1', content: 5 },
      { sequence: '1', content: 6, fault: 'sigma' },
    ]);
    expect(linesOf(store)).toEqual([0]);
    expect(asideOf(store)).toEqual(['1: sigma']);
  });

  it('counts by site, and apart where the site is unknown', () => {
    const store = found([{ site: 1, fault: 'sigma' }, { site: -1, fault: 'columns' }, { site: -1, fault: 'columns' }, { sequence: '1' }]);
    expect(Array.from(store.counts.lines)).toEqual([1, 1, 2]);
    const counted = store.counts.setAside.map((ofSite) => Array.from(ofSite).reduce((sum, count) => sum + count, 0));
    expect(counted).toEqual([0, 1, 2]);
  });

  it('keeps the place of what is set aside', () => {
    const { setAside } = found([{ sequence: '1' }, { sequence: '1', content: 1, file: 3 }]);
    const at = Array.from(setAside.line.subarray(0, 2)).indexOf(1);
    expect([setAside.file[at], setAside.offsetBytes[at], setAside.lengthBytes[at]]).toEqual([3, 100, 11]);
  });

  it('finds every one of 20,000 identities again', () => {
    const once = Array.from({ length: MANY }, (_, n): Line => ({ sequence: String(n >> 1), site: n % 2, content: n }));
    const store = found([...once, ...once]);
    expect(store.rows).toHaveLength(MANY);
    expect(Array.from(store.counts.repeated)).toEqual([MANY / 2, MANY / 2, 0]);
    expect(store.setAsideCount).toBe(0);
  });
});
