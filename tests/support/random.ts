import fc from 'fast-check';

/** The number of cases of a random test that names none of its own, and the same for `npm run test:long`. */
const CASES = 100;
const LONG_CASES = 5_000;

const { LONG, SEED } = process.env;
fc.configureGlobal({
  numRuns: LONG ? LONG_CASES : CASES,
  // A failing property prints its seed; SEED=... runs every property from that one.
  ...(SEED && { seed: Number(SEED) }),
});
