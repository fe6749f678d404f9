import * as z from 'zod';
import { describe, expect, it } from 'vitest';
import { type Problem } from '../outcome';
import { firstProblem, pathText, valueText } from './first-problem';
import { listOf, notNegative, record } from './leaves';

const schema = record({ sites: listOf(record({ delay_ns: notNegative('nanoseconds') }), 'sites') });

function problemWith(input: unknown): Problem {
  const result = schema.safeParse(input);
  if (result.success) throw new Error('nothing is wrong');
  return firstProblem(result.error, input, 'some-form').problem;
}

describe('the path of a field', () => {
  it.each([
    [['sites', 0, 'position', 'itrs_m', 2], 'sites[0].position.itrs_m[2]'],
    [['network'], 'network'],
    [[3, 'x'], '[3].x'],
    [[], ''],
  ])('is %j as %s', (path, text) => {
    expect(pathText(path)).toBe(text);
  });
});

describe('a value in a message', () => {
  it.each([
    ['text', '"text"'],
    ['two\nlines', '"two\\nlines"'],
    [1.5, '1.5'],
    [null, 'null'],
    [true, 'true'],
    [Infinity, 'Infinity'],
    [-Infinity, '-Infinity'],
    [NaN, 'NaN'],
    [[], '[]'],
    [{ a: [1] }, '{"a":[1]}'],
  ])('%j stands as %s', (value, text) => {
    expect(valueText(value)).toBe(text);
  });

  it('is cut after 80 characters', () => {
    expect(valueText('x'.repeat(78))).toBe(`"${'x'.repeat(78)}"`);
    expect(valueText('x'.repeat(79))).toBe(`"${'x'.repeat(79)}...`);
  });
});

describe('the first problem of an input', () => {
  it('names field, value and what would be right', () => {
    expect(problemWith({ sites: [{ delay_ns: 0 }, { delay_ns: -4 }] })).toEqual({
      code: 'some-form',
      where: 'sites[1].delay_ns',
      text: 'is -4; it must be a number of nanoseconds, 0 or more',
    });
  });

  it('says that a field is missing', () => {
    expect(problemWith({ sites: [{}] })).toMatchObject({
      where: 'sites[0].delay_ns',
      text: expect.stringMatching(/^is missing; /) as string,
    });
  });

  it('says which fields there are, where one is unknown', () => {
    expect(problemWith({ sites: [], colour: 'red' })).toMatchObject({ where: 'colour', text: '"red": no such field; known here: sites' });
  });

  it('finds an unknown field with a name that every object has', () => {
    const input: unknown = JSON.parse('{"sites": [], "__proto__": {"x": 1}}');
    expect(problemWith(input)).toMatchObject({ where: '__proto__', text: '{"x":1}: no such field; known here: sites' });
  });

  it('is about the whole where that is wrong', () => {
    expect(problemWith([])).toMatchObject({ where: '', text: 'is []; it must be an object { }' });
  });

  it('is there even if the schema gave none', () => {
    expect(firstProblem(new z.ZodError([]), 1, 'some-form').problem).toEqual({ code: 'some-form', where: '', text: 'is not usable' });
  });
});
