import { describe, expect, it } from 'vitest';
import { sha1OfAscii } from './sha1';

// Source: NIST, "Examples with Intermediate Values", SHA-1 (FIPS 180-2 appendix A); the empty text from RFC 3174's errata and common knowledge.
describe('SHA-1', () => {
  it.each([
    ['one block', 'abc', 'a9993e364706816aba3e25717850c26c9cd0d89d'],
    ['two blocks', 'abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq', '84983e441c3bd26ebaae4aa1f95129e5e54670f1'],
    ['nothing', '', 'da39a3ee5e6b4b0d3255bfef95601890afd80709'],
    ['a million letters', 'a'.repeat(1_000_000), '34aa973cd4c4daa4f61eeb2bdbad27316534016f'],
  ])('of %s', (_name, text, digest) => {
    expect(sha1OfAscii(text)).toBe(digest);
  });

  it('takes ASCII only', () => {
    expect(() => sha1OfAscii('caf\u00e9')).toThrow(/character 233 at 3/);
  });
});
