import { describe, expect, it } from 'vitest';
import { csvOf, jsonOf, readCsv } from './desk-export';

const sheet = {
  columns: ['name', 'value'],
  rows: [
    ['=SUM(A1)', -1.25],
    ["'quoted", 1e-17],
    ['+a, "b"\nc', 0.1 + 0.2],
    ['-x', null],
    ['@y', 1796136979769916],
    ['plain', 3],
  ],
} as const;

describe('an exported table', () => {
  it('35: lets no text be a formula', () => {
    for (const [name] of sheet.rows) {
      const first = csvOf({ columns: [], rows: [[name]] }).split('\r\n')[1] ?? '';
      expect(first.replace(/^"/, '')).not.toMatch(/^[=+\-@\t]/);
    }
  });

  it('35: comes back with identical values', () => {
    const [head, ...rows] = readCsv(csvOf(sheet));
    expect(head).toEqual(sheet.columns);
    expect(rows.map(([name]) => name)).toEqual(sheet.rows.map(([name]) => name));
    expect(rows.map(([, value]) => (value === '' ? null : Number(value)))).toEqual(sheet.rows.map(([, value]) => value));
    const json = JSON.parse(jsonOf(sheet)) as { name: string; value: number | null }[];
    expect(json.map(({ name, value }) => [name, value])).toEqual(sheet.rows);
  });
});
