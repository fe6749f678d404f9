import { C_M_S } from '../constants';
import { type FrameOrder, orderFrom } from '../relativity/order';
import { type IntervalClass } from '../relativity/verdict';

/** What may be claimed: of a pair in every frame, in one, of cause; of a pair or of the whole that no order is common; that it is undecided. */
export const CLAIM_KINDS = ['before-in-every-frame', 'before-in-frame', 'did-not-cause', 'no-common-order', 'undecided'] as const;
export type ClaimKind = (typeof CLAIM_KINDS)[number];

/** A statement about one pair of a set, or (a and b null) about the whole. */
export interface Claim {
  readonly kind: ClaimKind;
  /** Place in the set, 1, 2, 3, ..., of the event that is said to be first, or not to have been caused by b. */
  readonly a: number | null;
  readonly b: number | null;
  /** Code of the frame of `before-in-frame`; null for the geocentric one, and with every other kind. */
  readonly frame: string | null;
}

/** A number that is infinite where an error is 0. */
type Unbounded = number | 'Infinity' | '-Infinity';

/** What claims need of a pair; `a` and `b` are places in the set, a the earlier, and all numbers are from a to b. */
export interface PairNumbers {
  readonly a: number;
  readonly b: number;
  readonly class: IntervalClass;
  readonly dtNs: number;
  readonly distanceM: number;
  readonly sigmaDtNs: number;
  readonly sigmaGapNs: number;
  readonly marginSigma: Unbounded;
  readonly reverseMarginSigma: Unbounded;
  readonly turning: { readonly speedC: number } | null;
  readonly terms: readonly { readonly name: string; readonly sigmaNs: number }[];
  /** One for each frame of the set. */
  readonly orders: readonly { readonly dtNs: number; readonly sigmaNs: number; readonly order: FrameOrder }[];
}

/** What claims need of a set: its events in their order, its frames, every pair of it, and how many standard errors make a decision. */
export interface NumbersOfSet {
  readonly sigmas: number;
  readonly events: readonly { readonly name: string }[];
  readonly frames: readonly { readonly code: string; readonly gamma: number }[];
  readonly pairs: readonly PairNumbers[];
}

/** How far a time difference would have to be wrong for a claim to fall. */
export interface ClockError {
  /** Change of the time from the claim's a to its b at which the claim is no longer carried, ns, positive for a later b. */
  readonly changeNs: number;
  /** The size of that change in standard errors of a's clock, of b's, or of the rate of the one clock record stretch that both share. */
  readonly inSigmasOf: { readonly a: number | null; readonly b: number | null; readonly rate: number | null };
}

/** The numbers that a claim of a pair states. */
export interface PairClaimNumbers {
  readonly sigmas: number;
  readonly class: IntervalClass;
  /** From the claim's a to its b, in the claim's frame where it has one. */
  readonly dtNs: number;
  /** One standard error of what decides the claim: the time in its frame, or the distance from the light cone. */
  readonly sigmaNs: number;
  /** By how many of these the claim stands; must exceed `sigmas`. For `undecided` the pair's margin. */
  readonly marginSigma: Unbounded;
  /** Null unless the pair is spacelike. */
  readonly turningSpeedC: number | null;
  /** Null for `undecided`, which no error undoes. */
  readonly undoneBy: ClockError | null;
}

/** The numbers that a claim of the whole states. */
export interface WholeClaimNumbers {
  readonly sigmas: number;
  readonly pairs: number;
  readonly spacelikePairs: number;
  /** How surely the surest spacelike pair is one, in standard errors; null without one. */
  readonly marginSigma: Unbounded | null;
  readonly leastTurningSpeedC: number | null;
}

export type ClaimNumbers = PairClaimNumbers | WholeClaimNumbers;

/** A claim's pair, seen from the claim's a to its b. */
interface ClaimedPair {
  readonly pair: PairNumbers;
  /** Whether the claim's a is the earlier. */
  readonly isForward: boolean;
  readonly names: string;
}

/** What decides a claim of a pair: it stands where `valueNs` exceeds so many standard errors. */
interface Decider {
  readonly isCarried: boolean;
  readonly dtNs: number;
  readonly valueNs: number;
  readonly sigmaNs: number;
  readonly marginSigma: Unbounded;
  /** What one nanosecond more from a to b adds to the value. */
  readonly perNs: number;
  /** The value in words, as the subject of a sentence about its margin. */
  readonly what: string;
}

const spacelikeOf = (set: NumbersOfSet): readonly PairNumbers[] => set.pairs.filter((pair) => pair.class === 'spacelike');
const unbounded = (value: number): Unbounded => (value === Infinity ? 'Infinity' : value === -Infinity ? '-Infinity' : value);
const opposite = (value: Unbounded): Unbounded => unbounded(0 - Number(value));
const inSigmas = (valueNs: number, sigmaNs: number): Unbounded => unbounded(valueNs === 0 ? 0 : valueNs / sigmaNs);

function claimedPair(set: NumbersOfSet, { a, b }: Claim): ClaimedPair | undefined {
  if (a === null || b === null) return undefined;
  const [earlier, later] = a < b ? [a, b] : [b, a];
  const pair = set.pairs.find((one) => one.a === earlier && one.b === later);
  return pair && { pair, isForward: a < b, names: `${set.events[a - 1]?.name ?? ''} and ${set.events[b - 1]?.name ?? ''}` };
}

/** The order in the claim's frame; undefined where the set has no such frame. */
function orderInFrame(set: NumbersOfSet, pair: PairNumbers, code: string | null) {
  if (code === null) return { dtNs: pair.dtNs, sigmaNs: pair.sigmaDtNs, gamma: 1, order: orderFrom(pair.dtNs, pair.sigmaDtNs, set.sigmas) };
  const at = set.frames.findIndex((frame) => frame.code === code);
  const order = pair.orders[at];
  return order && { ...order, gamma: set.frames[at]?.gamma ?? 1 };
}

/** What decides a claim; nothing for `undecided`, and where the set has not what it speaks of. */
function deciderOf(set: NumbersOfSet, { kind, frame }: Claim, { pair, isForward }: ClaimedPair): Decider | undefined {
  const sign = isForward ? 1 : -1;
  const dtNs = sign * pair.dtNs;
  const lightNs = (pair.distanceM / C_M_S) * 1e9;
  const gap = { dtNs, sigmaNs: pair.sigmaGapNs };
  switch (kind) {
    case 'before-in-every-frame':
      return {
        ...gap,
        isCarried: isForward && pair.class === 'timelike',
        valueNs: dtNs - lightNs,
        marginSigma: isForward ? pair.marginSigma : opposite(pair.reverseMarginSigma),
        perNs: 1,
        what: 'the first lies before the light cone of the second',
      };
    case 'no-common-order':
      return {
        ...gap,
        isCarried: pair.class === 'spacelike',
        valueNs: lightNs - pair.dtNs,
        marginSigma: opposite(pair.marginSigma),
        perNs: -sign,
        what: 'they lie outside of the light cone',
      };
    case 'did-not-cause':
      return {
        ...gap,
        isCarried: isForward ? Number(pair.reverseMarginSigma) > set.sigmas : pair.class === 'spacelike',
        valueNs: lightNs + dtNs,
        marginSigma: isForward ? pair.reverseMarginSigma : opposite(pair.marginSigma),
        perNs: 1,
        what: 'light from the second comes too late for the first',
      };
    case 'before-in-frame': {
      const order = orderInFrame(set, pair, frame);
      if (!order) return undefined;
      const frameDtNs = sign * order.dtNs;
      return {
        isCarried: order.order === (isForward ? 'a' : 'b'),
        dtNs: frameDtNs,
        sigmaNs: order.sigmaNs,
        valueNs: frameDtNs,
        marginSigma: inSigmas(frameDtNs, order.sigmaNs),
        perNs: order.gamma,
        what: `the first is before the second in ${frame ?? 'the geocentric frame'}`,
      };
    }
    case 'undecided':
      return undefined;
  }
}

/**
 * The strongest claim that the numbers carry, for each pair in the order of pairs, and that no order is common to the whole where some pair is
 * spacelike.
 *
 * @returns timelike: before in every frame, the earlier first; spacelike: no common order; undecided: undecided
 */
export function proposedClaims(set: NumbersOfSet): Claim[] {
  const kinds = { timelike: 'before-in-every-frame', spacelike: 'no-common-order', undecided: 'undecided' } as const;
  const claims: Claim[] = set.pairs.map((pair) => ({ kind: kinds[pair.class], a: pair.a, b: pair.b, frame: null }));
  return spacelikeOf(set).length === 0 ? claims : [...claims, { kind: 'no-common-order', a: null, b: null, frame: null }];
}

const shortly = (value: number): string => String(Number(value.toPrecision(4)));

/**
 * Why a claim says more than the numbers of its set carry.
 *
 * @returns a sentence with the numbers; undefined where the claim is carried: `before-in-every-frame` by a timelike pair whose a is the earlier,
 *   `before-in-frame` by an order there beyond the set's standard errors, `did-not-cause` (b did not cause a) by a reverse margin beyond them
 *   or, with b the earlier, by a spacelike pair, `no-common-order` by a spacelike pair (of the whole by any), `undecided` always
 */
export function whyNotSupported(set: NumbersOfSet, claim: Claim): string | undefined {
  if (claim.frame !== null && claim.kind !== 'before-in-frame')
    return `a frame belongs to the claim before-in-frame alone, not to ${claim.kind}`;
  if (claim.a === null && claim.b === null) {
    if (claim.kind !== 'no-common-order') return `${claim.kind} is said of a pair; of the whole only no-common-order can be`;
    if (spacelikeOf(set).length > 0) return undefined;
    return `none of the ${set.pairs.length} pairs is spacelike at ${shortly(set.sigmas)} standard errors, so an order may be common to all frames`;
  }
  const claimed = claimedPair(set, claim);
  if (!claimed)
    return `the places ${claim.a ?? 'none'} and ${claim.b ?? 'none'} are no pair; places of two events are needed, from 1 to ${set.events.length}`;
  if (claim.kind === 'undecided') return undefined;
  const decider = deciderOf(set, claim, claimed);
  if (!decider)
    return `the frame ${claim.frame ?? ''} is not among those of the candidate: ${set.frames.map(({ code }) => code).join(', ')}`;
  if (decider.isCarried) return undefined;
  return (
    `of ${claimed.names}, that ${decider.what} holds by ${shortly(Number(decider.marginSigma))} standard errors of ${shortly(decider.sigmaNs)} ns, ` +
    `and more than ${shortly(set.sigmas)} are needed; the pair is ${claimed.pair.class}`
  );
}

/**
 * How far the time difference of a claim's pair would have to be wrong for the claim to fall.
 *
 * @returns the signed change of the time from a to b that brings what decides the claim to exactly the set's standard errors, and its size in
 *   those of each clock (null where the clock is exact or cancels); null for `undecided` and for the whole
 */
export function clockErrorThatUndoes(set: NumbersOfSet, claim: Claim): ClockError | null {
  const claimed = claimedPair(set, claim);
  const decider = claimed && deciderOf(set, claim, claimed);
  if (!claimed || !decider) return null;
  const changeNs = (set.sigmas * decider.sigmaNs - decider.valueNs) / decider.perNs;
  const inSigmasOf = (name: string): number | null => {
    const sigmaNs = claimed.pair.terms.find((term) => term.name === name)?.sigmaNs ?? 0;
    return sigmaNs > 0 ? Math.abs(changeNs) / sigmaNs : null;
  };
  const [a, b] = claimed.isForward ? ['clock-a', 'clock-b'] : ['clock-b', 'clock-a'];
  return { changeNs, inSigmasOf: { a: inSigmasOf(a), b: inSigmasOf(b), rate: inSigmasOf('rate') } };
}

/** Whether a set has what a claim speaks of: its pair and its frame, or the whole. */
export function isOfSet(set: NumbersOfSet, claim: Claim): boolean {
  if (claim.a === null && claim.b === null) return claim.kind === 'no-common-order';
  const claimed = claimedPair(set, claim);
  return claimed !== undefined && (claim.kind === 'undecided' || deciderOf(set, claim, claimed) !== undefined);
}

/**
 * The numbers that a claim states, so that they can be read beside it and compared when they are computed again.
 *
 * @param claim one that is of the set (`isOfSet`), carried or not
 * @throws RangeError where it is not
 */
export function numbersOf(set: NumbersOfSet, claim: Claim): ClaimNumbers {
  const { sigmas } = set;
  if (claim.a === null && claim.b === null) {
    const spacelike = spacelikeOf(set);
    const margins = spacelike.map(({ marginSigma }) => -Number(marginSigma));
    const speeds = spacelike.flatMap(({ turning }) => (turning ? [turning.speedC] : []));
    return {
      sigmas,
      pairs: set.pairs.length,
      spacelikePairs: spacelike.length,
      marginSigma: margins.length > 0 ? unbounded(Math.max(...margins)) : null,
      leastTurningSpeedC: speeds.length > 0 ? Math.min(...speeds) : null,
    };
  }
  const claimed = claimedPair(set, claim);
  const decider = claimed && deciderOf(set, claim, claimed);
  if (!claimed || (!decider && claim.kind !== 'undecided'))
    throw new RangeError(`the set has no numbers of the claim ${JSON.stringify(claim)}`);
  const { pair, isForward } = claimed;
  return {
    sigmas,
    class: pair.class,
    dtNs: decider?.dtNs ?? (isForward ? pair.dtNs : -pair.dtNs),
    sigmaNs: decider?.sigmaNs ?? pair.sigmaGapNs,
    marginSigma: decider?.marginSigma ?? pair.marginSigma,
    turningSpeedC: pair.turning?.speedC ?? null,
    undoneBy: clockErrorThatUndoes(set, claim),
  };
}
