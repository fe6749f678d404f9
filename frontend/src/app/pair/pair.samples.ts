import { type PairInFull, type PairsOfSet } from '#shared/contract/pair-routes';
import { pairSeen, type PairSeen } from './pair-seen';

interface Wanted {
  readonly class: PairInFull['class'];
  readonly dtNs: number;
  readonly lightMs: number;
  readonly sigmaNs?: number;
  readonly distanceSigmaNs?: number;
  readonly reverse?: number;
  /** Of both events, where it is one. */
  readonly site?: string;
}

const M_PER_LIGHT_MS = 299_792.458;

/** An answer about a pair along the x axis, in the geocentric frame, one at 0.6 c along it, and one across it. */
export function setOf({ class: kind, dtNs, lightMs, sigmaNs = 1, distanceSigmaNs = 0, reverse = 10, site }: Wanted): PairsOfSet {
  const distanceM = lightMs * M_PER_LIGHT_MS;
  const lightNs = lightMs * 1e6;
  const event = (id: number, code: string, xM: number): PairsOfSet['events'][number] => ({
    id,
    name: `${code}:${id}`,
    site: site ?? code,
    at: { taiS: 1_800_000_000, ps: 0 },
    placeM: [xM, 0, 0],
    sigmaNs,
    version: 1,
    terms: [{ name: 'reading', sigmaNs }],
  });
  return {
    sigmas: 3,
    events: [event(1, 'AAA', 0), event(2, 'BBB', distanceM)],
    frames: [
      { code: 'across', gamma: 1.25, gammaBeta: [0, 0.75, 0] },
      { code: 'along', gamma: 1.25, gammaBeta: [0.75, 0, 0] },
      { code: 'geocentric', gamma: 1, gammaBeta: [0, 0, 0] },
    ],
    pairs: [
      {
        a: 1,
        b: 2,
        class: kind,
        dtNs,
        distanceM,
        sigmaDtNs: sigmaNs,
        sigmaGapNs: Math.hypot(sigmaNs, distanceSigmaNs),
        marginSigma: (dtNs - lightNs) / sigmaNs,
        reverseMarginSigma: reverse,
        intervalM2: 0,
        properTimeS: null,
        properDistanceM: null,
        turning: kind === 'spacelike' ? { speedC: dtNs / lightNs, sigmaC: sigmaNs / lightNs, toward: [1, 0, 0] } : null,
        terms: [{ name: 'distance', sigmaNs: distanceSigmaNs }],
        orders: [
          { dtNs: 0, sigmaNs: 1, order: 'tie' },
          { dtNs: -5, sigmaNs: 1, order: 'b' },
          { dtNs, sigmaNs: 1, order: 'a' },
        ],
      },
    ],
  };
}

/** The same as a page sees it. */
export function seenOf(wanted: Wanted): PairSeen {
  const seen = pairSeen(setOf(wanted));
  if (!seen) throw new Error('the sample holds no pair');
  return seen;
}
