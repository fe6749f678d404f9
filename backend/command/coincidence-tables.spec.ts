import { describe, expect, it } from 'vitest';
import { setName } from './coincidence-tables';

describe('the name of a set', () => {
  // printf 'light2\nORL:17\nVES:5' | sha256sum (GNU coreutils) gives bb528c4d6d1ffdf262ca98420cad2ac4e9d0efaed85c1e2298aefd80d2f8fc27.
  it('is the beginning of a SHA-256 over rule and events, one a line', () => {
    expect(setName('light2', ['ORL:17', 'VES:5'])).toBe('bb528c4d6d1f');
  });

  it('is the same whatever the order of the events', () => {
    const names = ['VES:5', 'ORL:b:9', 'ORL:17'];
    expect(setName('r', names)).toBe(setName('r', names.toReversed()));
    expect(names).toEqual(['VES:5', 'ORL:b:9', 'ORL:17']);
  });

  // printf 'r\nA:10\nA:9\nB:1\na:1' | sha256sum (GNU coreutils): by code unit, so 10 before 9 and B before a.
  it('sorts the events as text', () => {
    expect(setName('r', ['a:1', 'B:1', 'A:9', 'A:10'])).toBe('e7a702736cba');
  });

  it('is another under another rule, or with another event', () => {
    const names = [setName('r', ['A:1', 'B:1']), setName('s', ['A:1', 'B:1']), setName('r', ['A:1', 'B:2']), setName('r', ['A:1'])];
    expect(new Set(names).size).toBe(4);
  });
});
