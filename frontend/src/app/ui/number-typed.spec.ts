import { describe, expect, it } from 'vitest';
import { between } from '#shared/contract/setup-leaves';
import { numberControl, numberOrEmpty } from './controls';
import { numberTyped } from './number-typed';

describe('a typed number', () => {
  it.each([
    ['1043.2', 1043.2],
    [' 1 043,2 ', 1043.2],
    ['\u22124.7', -4.7],
    ['1e-3', 0.001],
    ['', undefined],
    ['12 ns', '12 ns'],
    ['Infinity', 'Infinity'],
    ['1.2.3', '1.2.3'],
  ])('%j is %j', (typed, value) => {
    expect(numberTyped(typed)).toBe(value);
  });
});

describe('a field for a number', () => {
  const schema = between(0, 1e15, 'nanoseconds');
  it('says that it is missing, and of what is not right what would be', () => {
    expect(numberControl(schema).errors).toEqual({ zod: 'It is missing.' });
    expect(numberControl(schema, '-1').errors).toEqual({
      zod: 'It must be a number of nanoseconds from 0 to 1\u202f000\u202f000\u202f000\u202f000\u202f000.',
    });
    expect(numberControl(schema, '12').errors).toBeNull();
  });

  it('may be empty where it says so', () => {
    expect(numberOrEmpty(schema).errors).toBeNull();
  });
});
