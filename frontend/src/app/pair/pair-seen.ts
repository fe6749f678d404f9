import { C_M_S } from '#shared/constants';
import { type PairInFull, type PairsOfSet } from '#shared/contract/pair-routes';
import { norm, scale, subtract, type Vec3 } from '#shared/relativity/vector';

type EventOfPair = PairsOfSet['events'][number];

/** A pair as the server computed it, with what a page about it asks for again and again. */
export interface PairSeen {
  readonly pair: PairInFull;
  /** How many standard errors make a decision. */
  readonly sigmas: number;
  /** The earlier event, and the later one (or one at the same instant). */
  readonly a: EventOfPair;
  readonly b: EventOfPair;
  /** Whether one site wrote both. */
  readonly isOneSite: boolean;
  /** Light-time from the one's place to the other's, ns. */
  readonly lightNs: number;
  /** Unit vector from a's place to b's, GCRS axes; undefined where they are one place. */
  readonly toward: Vec3 | undefined;
  /** The speed along the baseline at which both are simultaneous, in c, with its standard error; undefined where no frame is that fast. */
  readonly turning: { readonly speedC: number; readonly sigmaC: number } | undefined;
}

/** The pair of a set of two; undefined where the answer holds none. */
export function pairSeen({ events, pairs, sigmas }: PairsOfSet): PairSeen | undefined {
  const [pair] = pairs;
  const [a, b] = pair ? [events[pair.a - 1], events[pair.b - 1]] : [];
  if (!pair || !a || !b) return undefined;
  const dxM = subtract(b.placeM, a.placeM);
  const lengthM = norm(dxM);
  return {
    pair,
    sigmas,
    a,
    b,
    isOneSite: a.site === b.site,
    lightNs: (pair.distanceM / C_M_S) * 1e9,
    toward: lengthM > 0 ? scale(1 / lengthM, dxM) : undefined,
    turning: turningOf(pair),
  };
}

/** That of the server for a spacelike pair; for an undecided one the same formula says where its order would turn. */
function turningOf({ class: kind, turning, dtNs, distanceM, sigmaDtNs, terms }: PairInFull): PairSeen['turning'] {
  if (turning) return turning;
  const lightNs = (distanceM / C_M_S) * 1e9;
  if (kind !== 'undecided' || !(dtNs < lightNs)) return undefined;
  const speedC = dtNs / lightNs;
  const sigmaDNs = terms.find(({ name }) => name === 'distance')?.sigmaNs ?? 0;
  return { speedC, sigmaC: Math.hypot(sigmaDtNs, speedC * sigmaDNs) / lightNs };
}

/** What an event is called beside the other: its site's code, or with the same site its own name. */
export const shortNames = ({ a, b, isOneSite }: PairSeen): readonly [string, string] => (isOneSite ? [a.name, b.name] : [a.site, b.site]);
