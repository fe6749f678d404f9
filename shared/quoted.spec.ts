import { describe, expect, it } from 'vitest';
import { quoted } from './quoted';

describe('a quoted value', () => {
  it.each([
    ['', '""'],
    ['a "b"', '"a \\"b\\""'],
    ['one\ntwo', '"one\\ntwo"'],
    ['x'.repeat(60), `"${'x'.repeat(60)}"`],
    ['x'.repeat(61), `"${'x'.repeat(60)}"...`],
  ])('%j', (text, shown) => {
    expect(quoted(text)).toBe(shown);
  });
});
