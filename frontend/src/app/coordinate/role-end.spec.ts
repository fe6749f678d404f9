import { describe, expect, it } from 'vitest';
import { endOf, roleEnd, typedEnd } from './role-end';

describe('the end of a role', () => {
  it('is typed to the minute in UTC, and nothing means until it is taken away', () => {
    expect(endOf('2027-03-01T12:30')).toBe('2027-03-01T12:30:00.000Z');
    expect(typedEnd('2027-03-01T12:30:00.000Z')).toBe('2027-03-01T12:30');
    expect(endOf('')).toBeNull();
    expect(typedEnd(null)).toBe('');
  });

  it('is refused in any other form', () => {
    expect(roleEnd().safeParse('2027-03-01').success).toBe(false);
    expect(roleEnd().safeParse('').success).toBe(true);
  });
});
