import { describe, expect, it } from 'vitest';
import { siteCodes } from './site-codes';

const seen = [
  { id: 3, code: 'ORL' },
  { id: 4, code: 'TAW' },
];

describe('sites by their codes', () => {
  it.each([
    [[3, 4], 'ORL, TAW'],
    [[7, 4, 8], 'TAW, 2 other sites'],
    [[7], '1 other site'],
  ])('of %j are %j', (ids, text) => {
    expect(siteCodes(ids, seen)).toBe(text);
  });
});
