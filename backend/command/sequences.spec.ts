import { describe, expect, it } from 'vitest';
import { Sequences } from './sequences';

describe('sequences', () => {
  it.each(['0', '7', '999999999999999', '1000000000000000', '9007199254740993', '123456789012345678901234567890'])(
    'are given back as they were: %s',
    (digits) => {
      const sequences = new Sequences();
      expect(sequences.textOf(sequences.codeOf(digits))).toBe(digits);
    },
  );

  it('have one number each, however often they come', () => {
    const sequences = new Sequences();
    const codes = ['9007199254740992', '9007199254740993', '5'].map((digits) => sequences.codeOf(digits));
    expect(new Set(codes).size).toBe(3);
    expect(['9007199254740992', '9007199254740993', '5'].map((digits) => sequences.codeOf(digits))).toEqual(codes);
  });

  it('sort as whole numbers, in whatever order they came', () => {
    const sorted = ['2', '10', '999999999999999', '1000000000000000', '9007199254740992', '9007199254740993', '10000000000000000'];
    for (const came of [sorted, sorted.toReversed()]) {
      const sequences = new Sequences();
      const codes = came.map((digits) => sequences.codeOf(digits));
      expect(codes.sort((a, b) => sequences.compare(a, b)).map((code) => sequences.textOf(code))).toEqual(sorted);
    }
  });

  it('that are equal are neither before nor after', () => {
    const sequences = new Sequences();
    const [short, long] = [sequences.codeOf('5'), sequences.codeOf('9007199254740993')];
    expect(sequences.compare(short, short)).toBe(0);
    expect(sequences.compare(long, long)).toBe(0);
  });
});
