import { describe, expect, it } from 'vitest';
import { compareIdentities, type EventIdentity, identityText } from './event-identity';

const identity = (site: number, series: string, sequence: string): EventIdentity => ({ site, series, sequence });

describe('the order of identities', () => {
  it('is site, then series by code unit with the empty one first, then sequence as a number of any length', () => {
    const ordered = [
      identity(0, '', '0'),
      identity(0, '', '9'),
      identity(0, '', '10'),
      identity(0, '', '90071992547409930'),
      identity(0, '', '90071992547409931'),
      identity(0, 'B', '2'),
      identity(0, 'a', '1'),
      identity(2, '', '0'),
      identity(10, '', '0'),
    ];
    expect([...ordered].reverse().sort(compareIdentities)).toEqual(ordered);
    expect(compareIdentities(identity(1, 'a', '5'), identity(1, 'a', '5'))).toBe(0);
  });

  it('has a text for each that no other has', () => {
    const texts = [identity(1, '', '11'), identity(11, '', '1'), identity(1, '1', '1')].map(identityText);
    expect(new Set(texts).size).toBe(3);
  });
});
