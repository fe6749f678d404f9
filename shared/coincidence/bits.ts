/** Sets of small numbers as bits in 32-bit words: number k is bit k & 31 of word k >> 5. */
export type Bits = Int32Array;

export const wordsFor = (size: number): number => (size + 31) >>> 5;

/** How many bits of a word are set (Warren, Hacker's Delight, 2nd ed. 2012, fig. 5-2). */
export function ones(word: number): number {
  let w = word - ((word >>> 1) & 0x55555555);
  w = (w & 0x33333333) + ((w >>> 2) & 0x33333333);
  return Math.imul((w + (w >>> 4)) & 0x0f0f0f0f, 0x01010101) >>> 24;
}

/** Number of the lowest bit of a word that is set; the word is not 0. */
export const lowest = (word: number): number => 31 - Math.clz32(word & -word);
