import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { differences, MOST_DIFFERENCES } from './differences';

describe('differences', () => {
  it('are none between a value and what its text is read as', () => {
    fc.assert(
      fc.property(fc.jsonValue(), (value) => {
        expect(differences(value, JSON.parse(JSON.stringify(value)))).toEqual([]);
      }),
    );
  });

  it.each([
    [{ a: [1, 2] }, { a: [1, 3] }, [{ path: 'a[1]', stated: 2, recomputed: 3 }]],
    [{ a: 0.1 }, { a: 0.1 + Number.EPSILON / 8 }, [{ path: 'a', stated: 0.1, recomputed: 0.1 + Number.EPSILON / 8 }]],
    [0, -0, []],
    [[1, 2, 3], [1, 2], [{ path: '[2]', stated: 3, recomputed: undefined }]],
    [
      { a: { b: 1 } },
      { a: { c: 1 } },
      [
        { path: 'a.b', stated: 1, recomputed: undefined },
        { path: 'a.c', stated: undefined, recomputed: 1 },
      ],
    ],
    [{ a: null }, { a: {} }, [{ path: 'a', stated: null, recomputed: {} }]],
    [{ a: [] }, { a: {} }, [{ path: 'a', stated: [], recomputed: {} }]],
    ['1', 1, [{ path: '', stated: '1', recomputed: 1 }]],
  ])('of %j and %j are %j', (stated, recomputed, found) => {
    expect(differences(stated, recomputed)).toEqual(found);
  });

  it('end at a thousand', () => {
    expect(
      differences(
        Array.from({ length: 2 * MOST_DIFFERENCES }, () => 1),
        Array.from({ length: 2 * MOST_DIFFERENCES }, () => 2),
      ),
    ).toHaveLength(MOST_DIFFERENCES);
  });
});
