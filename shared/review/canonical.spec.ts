import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { canonicalJson, firstOddity } from './canonical';

describe('canonicalJson', () => {
  it.each([
    [null, 'null'],
    [{ b: 1, a: [true, 'x'], C: {} }, '{"C":{},"a":[true,"x"],"b":1}'],
    [[0.1, -0, 1e21, 1e-7, 123456789012345680000], '[0.1,0,1e+21,1e-7,123456789012345680000]'],
    [{ '': 0, '\u00e9': 1, '\ud83d\ude00': 2, '\ufb33': 3 }, '{"":0,"\u00e9":1,"\ud83d\ude00":2,"\ufb33":3}'], // by code units: RFC 8785, 3.2.3
    ['a "b"\\\n\u0001\u2028', '"a \\"b\\"\\\\\\n\\u0001\u2028"'],
  ])('%j is %s', (value, text) => {
    expect(canonicalJson(value)).toBe(text);
  });

  it.each([
    [NaN, 'the value is NaN'],
    [{ a: [1, { b: Infinity }] }, 'a[1].b is Infinity'],
    [{ a: undefined }, 'a is undefined'],
    [[, 1], '[0] is undefined'], // eslint-disable-line no-sparse-arrays
    [{ a: 1n }, 'a is bigint'],
    [{ a: () => 1 }, 'a is function'],
  ])('refuses %o', (value, text) => {
    expect(() => canonicalJson(value)).toThrow(text);
  });

  it('gives the value back, and the same text whatever the order of keys', () => {
    fc.assert(
      fc.property(fc.jsonValue(), (value) => {
        const text = canonicalJson(value);
        expect(canonicalJson(JSON.parse(text))).toBe(text);
        expect(canonicalJson(turned(value))).toBe(text);
      }),
    );
  });
});

/** The same value with all keys put in from the last to the first. */
function turned(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(turned);
  if (typeof value !== 'object' || value === null) return value;
  return Object.fromEntries(
    Object.entries(value)
      .reverse()
      .map(([key, part]) => [key, turned(part)]),
  );
}

describe('firstOddity', () => {
  const oddity = (text: string) => firstOddity(text, JSON.parse(text));

  it('leaves white space aside, but not within texts', () => {
    fc.assert(
      fc.property(fc.jsonValue(), fc.integer({ min: 0, max: 4 }), (value, indent) => {
        const sorted: unknown = JSON.parse(canonicalJson(value));
        // JSON.parse puts keys that are whole numbers first, whatever their order in the text.
        if (JSON.stringify(sorted) === canonicalJson(value)) expect(oddity(JSON.stringify(sorted, null, indent))).toBeUndefined();
      }),
    );
    expect(oddity(JSON.stringify(['line \n \\'.repeat(500_000)], null, 2))).toBeUndefined();
    expect(oddity('{ "a b" : "c  d\\" e" ,\r\n\t"f":[1, 2]}')).toBeUndefined();
  });

  it.each([
    ['{"b":1,"a":2}', '{"b"', '{"a"'],
    ['{"a":1,"a":2}', '"a":1', '"a":2'],
    ['[0.10]', '0.10', '0.1]'],
    ['[0.1000000000000000055]', '0.100', '0.1]'],
    ['[1.0]', '1.0', '1]'],
    ['["\\u0061"]', '\\u0061', '"a"'],
  ])('finds what is odd in %s', (text, found, right) => {
    const odd = oddity(text);
    expect(odd?.found).toContain(found);
    expect(odd?.right).toContain(right);
  });
});
