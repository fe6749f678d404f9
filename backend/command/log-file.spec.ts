import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, describe, expect, it } from 'vitest';
import { readRecords } from './log-file';

/** As in the reader: what is read at once, so that records can be put across its ends. */
const BLOCK_BYTES = 1 << 17;
const LONGEST_RECORD_BYTES = 1 << 24;

interface Read {
  readonly fields: readonly string[];
  readonly line: number;
  /** The bytes at the record's place, one character each. */
  readonly raw: string;
  readonly isWhole: boolean;
}

const folder = mkdtempSync(join(tmpdir(), 'log-file-'));
afterAll(() => {
  rmSync(folder, { recursive: true });
});
const path = join(folder, 'log.csv');
const pace = { breathe: () => Promise.resolve() };

/** The records of a file with the given content; text is UTF-8. */
async function recordsOf(content: string | Buffer): Promise<{ records: readonly Read[]; bytes: number }> {
  writeFileSync(path, content);
  const written = readFileSync(path).toString('latin1');
  const records: Read[] = [];
  let bytes = 0;
  const take = (fields: string[], place: { line: number; offsetBytes: number; lengthBytes: number }, isWhole: boolean): void => {
    const { line, offsetBytes, lengthBytes } = place;
    records.push({ fields, line, raw: written.slice(offsetBytes, offsetBytes + lengthBytes), isWhole });
  };
  await readRecords(path, take, { pace, onBytes: (more) => (bytes += more) });
  return { records, bytes };
}

const fieldsOf = async (content: string | Buffer): Promise<readonly (readonly string[])[]> =>
  (await recordsOf(content)).records.map(({ fields }) => fields);

const latin = (text: string): string => Buffer.from(text).toString('latin1');

describe('reading a log', () => {
  it('gives fields, line and place of each record', async () => {
    const { records, bytes } = await recordsOf('a,b\n1,2\n');
    expect(records).toEqual([
      { fields: ['a', 'b'], line: 1, raw: 'a,b', isWhole: true },
      { fields: ['1', '2'], line: 2, raw: '1,2', isWhole: true },
    ]);
    expect(bytes).toBe(8);
  });

  it.each([
    ['no end of the last line', 'a,b\n1,2'],
    ['CRLF', 'a,b\r\n1,2\r\n'],
    ['CRLF but no end of the last line', 'a,b\r\n1,2'],
    ['both line ends', 'a,b\r\n1,2\n'],
    ['a carriage return at the end of the file', 'a,b\r\n1,2\r'],
    ['a byte order mark', '\ufeffa,b\n1,2\n'],
    ['quotes', '"a","b"\n"1",2\n'],
    ['quotes and CRLF', '"a","b"\r\n1,"2"\r\n'],
    ['quotes and no end of the last line', '"a","b"\r\n1,"2"'],
    ['a byte order mark before a quote', '\ufeff"a",b\n1,2\n'],
  ])('is the same with %s', async (_what, text) => {
    expect(await fieldsOf(text)).toEqual([
      ['a', 'b'],
      ['1', '2'],
    ]);
  });

  it.each([
    ['nothing', ''],
    ['a byte order mark alone', '\ufeff'],
    ['line ends alone', '\n\r\n\n'],
  ])('finds no record in %s', async (_what, text) => {
    expect(await fieldsOf(text)).toEqual([]);
  });

  it('counts empty lines and skips them', async () => {
    const { records } = await recordsOf('a,b\n\n\r\n1,2\n\n3,4');
    expect(records.map(({ line }) => line)).toEqual([1, 4, 6]);
  });

  it('takes a line of one empty quoted field, or of blanks, as a record', async () => {
    expect(await fieldsOf('a,b\n""\n  \n')).toEqual([['a', 'b'], [''], ['  ']]);
  });

  it('keeps line breaks, commas and doubled quotes within quotes, and counts the lines', async () => {
    const { records } = await recordsOf('a,b\n"x\ny","p, ""q"""\r\n"r\r\n\r\ns",t\n5,6\n');
    expect(records.map(({ fields, line }) => [line, ...fields])).toEqual([
      [1, 'a', 'b'],
      [2, 'x\ny', 'p, "q"'],
      [4, 'r\r\n\r\ns', 't'],
      [7, '5', '6'],
    ]);
    expect(records[1]!.raw).toBe('"x\ny","p, ""q"""');
  });

  it('takes a quote within an unquoted field as it is', async () => {
    expect(await fieldsOf('a,b\n5" pipe,x"y"\n')).toEqual([
      ['a', 'b'],
      ['5" pipe', 'x"y"'],
    ]);
  });

  it('keeps a carriage return at the end of a quoted field', async () => {
    expect(await fieldsOf('a\n"x\r"\n"x\r"\r\nx\r\nab"\r\n')).toEqual([['a'], ['x\r'], ['x\r'], ['x'], ['ab"']]);
  });

  it('finds the place of what is not UTF-8 too', async () => {
    const text = Buffer.concat([Buffer.from('a,b\n"caf\u00e9",1\n'), Buffer.from('"caf\xe9 \xff\xff",2\n\xe9,3\n4,5', 'latin1')]);
    const { records } = await recordsOf(text);
    expect(records.map(({ raw }) => raw)).toEqual(['a,b', latin('"caf\u00e9",1'), '"caf\xe9 \xff\xff",2', '\xe9,3', '4,5']);
    expect(records.map(({ fields }) => fields[0])).toEqual(['a', 'caf\u00e9', 'caf\ufffd \ufffd\ufffd', '\ufffd', '4']);
  });
});

describe('a broken quote', () => {
  it.each<[string, string]>([
    ['a blank', '"3" ,4'],
    ['a tab', '"3"\t,4'],
    ['a blank at the end of the line', '3,"4" '],
    ['a blank behind two quotes', '"" ,4'],
    ['a blank behind a doubled quote', '"3""" ,4'],
    ['a no-break space, which is two bytes', '"3"\u00a0,4'],
    ['a carriage return', '"3"\r,4'],
  ])('is one that %s follows: it spoils its own line and no other', async (_what, line) => {
    for (const end of ['\n', '\r\n']) {
      const { records } = await recordsOf(['a,b', '"1",2', line, '5,"6"', ''].join(end));
      expect(records.map(({ fields, isWhole }) => (isWhole ? fields : 'broken'))).toEqual([['a', 'b'], ['1', '2'], 'broken', ['5', '6']]);
      expect(records[2]!.raw).toBe(latin(line));
    }
    const { records } = await recordsOf(`a,b\n${line}`);
    expect(records[1]).toEqual({ fields: [], line: 2, raw: latin(line), isWhole: false });
  });

  it('spoils its own line and no other', async () => {
    const { records } = await recordsOf('a,b\n1,"x"y\r\n2,z\n"3"3,"4\n5,"6"\n');
    expect(records).toEqual([
      { fields: ['a', 'b'], line: 1, raw: 'a,b', isWhole: true },
      { fields: [], line: 2, raw: '1,"x"y', isWhole: false },
      { fields: ['2', 'z'], line: 3, raw: '2,z', isWhole: true },
      { fields: [], line: 4, raw: '"3"3,"4', isWhole: false },
      { fields: ['5', '6'], line: 5, raw: '5,"6"', isWhole: true },
    ]);
  });

  it('that is never closed spoils everything from its record on', async () => {
    const { records } = await recordsOf('a,b\n1,2\n3,"4\n5,6\n7,8\n');
    expect(records).toEqual([
      { fields: ['a', 'b'], line: 1, raw: 'a,b', isWhole: true },
      { fields: ['1', '2'], line: 2, raw: '1,2', isWhole: true },
      { fields: [], line: 3, raw: '3,"4\n5,6\n7,8', isWhole: false },
    ]);
  });

  it('that stays open for longer than any record spoils the rest of the file, though it is closed there', async () => {
    const row = `${'x'.repeat(99)}\n`;
    const { records } = await recordsOf(`a,b\n1,"2\n${row.repeat(1.01 * (LONGEST_RECORD_BYTES / row.length))}"\n3,4\n`);
    expect(records).toHaveLength(2);
    expect(records[1]).toMatchObject({ fields: [], line: 2, isWhole: false });
    expect(records[1]!.raw.slice(0, 6)).toBe('1,"2\nx');
    expect(records[1]!.raw.slice(-5)).toBe('"\n3,4');
  });
});

describe('a record that takes the rest of its file', () => {
  const swallowedIn = (content: string) => {
    writeFileSync(path, content);
    return readRecords(path, () => undefined, { pace, onBytes: () => undefined });
  };

  it('is told with its line and the reason', async () => {
    expect(await swallowedIn('a,b\n"1\n2",3\n4,"5\n6,7\n')).toEqual({ line: 4, why: 'a quote is not closed' });
    const long = 'x'.repeat(LONGEST_RECORD_BYTES + BLOCK_BYTES);
    expect(await swallowedIn(`a,b\n${long}\n`)).toEqual({ line: 2, why: `the line is longer than ${LONGEST_RECORD_BYTES} bytes` });
    expect(await swallowedIn('a,b\n1,"2"\n')).toBeUndefined();
  });
});

describe('a file in UTF-16', () => {
  it.each([
    ['little', [0xff, 0xfe, 0x61, 0x00]],
    ['big', [0xfe, 0xff, 0x00, 0x61]],
  ])('is refused, the %s end first', async (_what, bytes) => {
    await expect(recordsOf(Buffer.from(bytes))).rejects.toThrow(`${path}: is in UTF-16; it must be in UTF-8`);
  });
});

describe('random records', () => {
  const piece = fc.constantFrom('a', '7', ' ', ',', '"', '\n', '\r\n', '\r', '\u00e9', '\u{1d11e}');
  const field = fc.array(piece, { maxLength: 5 }).map((pieces) => pieces.join(''));
  const row = fc.record({
    fields: fc.array(fc.record({ text: field, isQuoted: fc.boolean() }), { minLength: 2, maxLength: 4 }),
    end: fc.constantFrom('\n', '\r\n'),
  });
  const cell = ({ text, isQuoted }: { text: string; isQuoted: boolean }): string =>
    isQuoted || /[",\r\n]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;

  /** Written by the rules of RFC 4180, they are read back, wherever a block ends among them. */
  const areReadBack = async (rows: readonly { fields: { text: string; isQuoted: boolean }[]; end: string }[], before: string) => {
    const raws = rows.map(({ fields }) => fields.map(cell).join(','));
    const { records } = await recordsOf(before + rows.map(({ end }, at) => `${raws[at]!}${end}`).join(''));
    const found = records.slice(before === '' ? 0 : -rows.length);
    expect(found.map(({ fields }) => fields)).toEqual(rows.map(({ fields }) => fields.map(({ text }) => text)));
    expect(found.map(({ raw }) => raw)).toEqual(raws.map(latin));
    expect(found.every(({ isWhole }) => isWhole)).toBe(true);
    let line = 1 + before.split('\n').length - 1;
    for (const [at, record] of found.entries()) {
      expect(record.line).toBe(line);
      line += raws[at]!.split('\n').length;
    }
  };

  it('are read back as they were written', async () => {
    await fc.assert(fc.asyncProperty(fc.array(row, { minLength: 1, maxLength: 6 }), (rows) => areReadBack(rows, '')));
  });

  it('are read back across the end of a block', async () => {
    const fillerLine = `${'f'.repeat(1021)},f\n`;
    const filler = fillerLine.repeat(BLOCK_BYTES / fillerLine.length - 1) + `${'f'.repeat(940)}\n`;
    await fc.assert(
      fc.asyncProperty(fc.array(row, { minLength: 1, maxLength: 6 }), fc.nat({ max: 90 }), (rows, extra) =>
        areReadBack(rows, `${filler}${'g'.repeat(extra)},g\n`),
      ),
    );
  });
});
