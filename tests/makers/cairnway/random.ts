/** Draws that are the same for one seed on every machine. */
export interface Random {
  /** In [0, 1). */
  readonly even: () => number;
  readonly between: (min: number, max: number) => number;
  /** Of mean 0 and standard deviation 1. */
  readonly normal: () => number;
}

/** Makes a stream of draws: a Weyl sequence through a mixing function of 32 bits. */
export function randomFrom(seed: number): Random {
  let state = seed >>> 0;
  const even = (): number => {
    state = (state + 0x9e3779b9) >>> 0;
    let mixed = state ^ (state >>> 16);
    mixed = Math.imul(mixed, 0x21f0aaad);
    mixed ^= mixed >>> 15;
    mixed = Math.imul(mixed, 0x735a2d97);
    return ((mixed ^ (mixed >>> 15)) >>> 0) / 2 ** 32;
  };
  return {
    even,
    between: (min, max) => min + (max - min) * even(),
    // Box and Muller 1958; 1 - even() is never 0.
    normal: () => Math.sqrt(-2 * Math.log(1 - even())) * Math.cos(2 * Math.PI * even()),
  };
}
