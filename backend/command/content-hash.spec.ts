import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { addCell, columnSeed, type ContentHash } from './content-hash';

/** The content of a record given as column names and cells, in that order. */
function contentOf(cells: readonly (readonly [column: string, cell: string])[]): ContentHash {
  const content = { first: 0, second: 0 };
  for (const [column, cell] of cells) addCell(columnSeed(column), cell, content);
  return content;
}

describe('the content of a record', () => {
  it('does not depend on the order of columns', () => {
    expect(contentOf([['amplitude', '5'], ['note', 'x']])).toEqual(contentOf([['note', 'x'], ['amplitude', '5']])); // prettier-ignore
  });

  it('is the same with an empty cell and without the column', () => {
    expect(contentOf([['amplitude', '5'], ['note', '']])).toEqual(contentOf([['amplitude', '5']])); // prettier-ignore
  });

  it.each([
    ['between words', 'a\nb', 'a\r\nb'],
    ['at the end', 'a\n', 'a\r\n'],
    ['twice', '\n\nx', '\r\n\nx'],
  ])('is the same with LF and CRLF %s', (_where, unix, dos) => {
    expect(contentOf([['note', unix]])).toEqual(contentOf([['note', dos]]));
  });

  it.each([
    ['another text', [['sequence', '7']], [['sequence', '007']]],
    ['another case', [['kind', 'test']], [['kind', 'Test']]],
    ['a blank more', [['note', 'x']], [['note', 'x ']]],
    ['a lone carriage return', [['note', 'x']], [['note', 'x\r']]],
    ['a carriage return before another', [['note', '\r\n']], [['note', '\r\r\n']]],
    ['a break less', [['note', 'x\n\ny']], [['note', 'x\ny']]],
    ['another column', [['note', 'x']], [['remark', 'x']]],
    [
      'cells changed over',
      [
        ['a', '1'],
        ['b', '2'],
      ],
      [
        ['a', '2'],
        ['b', '1'],
      ],
    ],
    ['a letter beyond 8 bits', [['note', '\u0141']], [['note', 'A']]],
    ['names and cells glued otherwise', [['ab', 'c']], [['a', 'bc']]],
    [
      'names and cells of three glued otherwise',
      [
        ['a', 'b'],
        ['c', 'd'],
      ],
      [
        ['a', 'd'],
        ['c', 'b'],
      ],
    ],
  ] as const)('is another with %s', (_what, one, other) => {
    expect(contentOf(one)).not.toEqual(contentOf(other));
  });

  it('is another for every one of 100,000 cells that differ in their digits', () => {
    const seen = new Set(Array.from({ length: 100_000 }, (_, n) => Object.values(contentOf([['amplitude', (n / 100).toFixed(2)]])).join()));
    expect(seen.size).toBe(100_000);
  });

  it('is the same for two records exactly when their cells are', () => {
    const cell = fc
      .array(fc.constantFrom('a', '7', '\n', '\r\n', '\r', '\u00e9', '\u{1d11e}'), { maxLength: 3 })
      .map((parts) => parts.join(''));
    const cells = fc.dictionary(fc.constantFrom('a', 'b', 'note', '__proto__'), cell, { noNullPrototype: false });
    const plain = (record: Record<string, string>): string =>
      JSON.stringify(
        Object.entries(record)
          .filter(([, cell]) => cell !== '')
          .map(([name, cell]) => [name, cell.replaceAll('\r\n', '\n')])
          .sort(),
      );
    fc.assert(
      fc.property(cells, cells, (one, other) => {
        const isSame = JSON.stringify(contentOf(Object.entries(one))) === JSON.stringify(contentOf(Object.entries(other)));
        expect(isSame).toBe(plain(one) === plain(other));
      }),
    );
  });
});
