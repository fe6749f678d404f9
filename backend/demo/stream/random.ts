/** Draws that are the same for one seed on every machine. */
export interface Random {
  /** In [0, 1). */
  readonly even: () => number;
  readonly between: (min: number, max: number) => number;
  /** Of mean 0 and standard deviation 1. */
  readonly normal: () => number;
  /** How often something of so many a slice happens in one. */
  readonly count: (mean: number) => number;
}

const mixed = (bits: number): number => {
  let x = bits ^ (bits >>> 16);
  x = Math.imul(x, 0x21f0aaad);
  x ^= x >>> 15;
  x = Math.imul(x, 0x735a2d97);
  return (x ^ (x >>> 15)) >>> 0;
};

/**
 * Makes a stream of draws: a Weyl sequence through a mixing function of 32 bits, which is far from enough for anything but a demo.
 *
 * @param parts whole numbers; each set of them has a stream of its own
 */
export function randomFrom(...parts: readonly number[]): Random {
  let state = parts.reduce((seed, part) => mixed((Math.imul(seed, 31) + part) >>> 0), 0x5eed);
  const even = (): number => {
    state = (state + 0x9e3779b9) >>> 0;
    return mixed(state) / 2 ** 32;
  };
  return {
    even,
    between: (min, max) => min + (max - min) * even(),
    // Box and Muller 1958; 1 - even() is never 0.
    normal: () => Math.sqrt(-2 * Math.log(1 - even())) * Math.cos(2 * Math.PI * even()),
    // Knuth 1969, The Art of Computer Programming 2, section 3.4.1 (Poisson deviates).
    count: (mean) => {
      const least = Math.exp(-mean);
      let left = even();
      let times = 0;
      while (left > least) {
        left *= even();
        times += 1;
      }
      return times;
    },
  };
}
