import { type FrozenResults } from '#shared/contract/certificate';
import { type PairInFull, type PairsOfSet } from '#shared/contract/pair-routes';
import { type Unbounded } from '#shared/contract/unbounded';
import { type NumberChanged } from '#shared/contract/review-routes';
import { nanosecondsOf } from '#shared/time/instant';

/** Most differences that are told of one candidate. */
const MOST_TOLD = 1_000;

type Changed = Omit<NumberChanged, 'where'>;

/** Whether a number moved further than so many of its standard errors; what is exact may not move at all. */
const hasMoved = (was: number, is: number, boundSigmas: number, sigma: number): boolean =>
  was !== is && !(Math.abs(is - was) <= boundSigmas * sigma);

const other = (was: Unbounded | null, is: Unbounded | null): Changed => ({ was, is });

function pairChanges(was: PairInFull, is: PairInFull, codes: readonly string[], boundSigmas: number): [string, Changed][] {
  const found: [string, Changed][] = [];
  const note = (name: string, before: number, after: number, sigma: number): void => {
    if (hasMoved(before, after, boundSigmas, sigma)) found.push([name, other(before, after)]);
  };
  if (was.class !== is.class) found.push(['class', { was: was.class, is: is.class }]);
  note('dtNs', was.dtNs, is.dtNs, was.sigmaDtNs);
  note('sigmaDtNs', was.sigmaDtNs, is.sigmaDtNs, was.sigmaDtNs);
  note('sigmaGapNs', was.sigmaGapNs, is.sigmaGapNs, was.sigmaGapNs);
  // Margins are in standard errors themselves.
  if (hasMoved(Number(was.marginSigma), Number(is.marginSigma), boundSigmas, 1))
    found.push(['marginSigma', other(was.marginSigma, is.marginSigma)]);
  if (hasMoved(Number(was.reverseMarginSigma), Number(is.reverseMarginSigma), boundSigmas, 1))
    found.push(['reverseMarginSigma', other(was.reverseMarginSigma, is.reverseMarginSigma)]);
  if (was.turning && is.turning) note('turning.speedC', was.turning.speedC, is.turning.speedC, was.turning.sigmaC);
  for (const [at, order] of was.orders.entries()) {
    const now = is.orders[at];
    if (!now) continue;
    const where = `orders.${codes[at] ?? at}`;
    if (order.order !== now.order) found.push([`${where}.order`, { was: order.order, is: now.order }]);
    note(`${where}.dtNs`, order.dtNs, now.dtNs, order.sigmaNs);
  }
  return found;
}

/**
 * What of a snapshot's numbers is another now: any class and order, and any number that moved further than the bound.
 *
 * @param was the results that were frozen
 * @param is the same events in the same frames as they are now; fewer where some do not stand any more
 * @param boundSigmas how far a number may move, in its own standard errors; margins, which are in these, by as much
 * @returns each by its path, such as `FRZ:17 BRW:4.marginSigma`
 */
export function snapshotDifferences(was: FrozenResults, is: Pick<PairsOfSet, 'events' | 'pairs'>, boundSigmas: number): NumberChanged[] {
  const found: NumberChanged[] = [];
  const now = new Map(is.events.map((event, at) => [event.name, { event, place: at + 1 }]));
  const codes = was.frames.map(({ code }) => code);
  const place = (at: number): number | undefined => now.get(was.events[at - 1]?.name ?? '')?.place;
  for (const { name, at, sigmaNs } of was.events) {
    const event = now.get(name)?.event;
    if (!event) found.push({ where: name, was: 'stands', is: null });
    else if (hasMoved(0, nanosecondsOf(event.at.taiS - at.taiS, event.at.ps - at.ps), boundSigmas, sigmaNs))
      found.push({ where: `${name}.at`, was: `${at.taiS} s ${at.ps} ps`, is: `${event.at.taiS} s ${event.at.ps} ps` });
  }
  for (const pair of was.pairs) {
    const [a, b] = [place(pair.a), place(pair.b)];
    if (a === undefined || b === undefined) continue;
    const where = `${was.events[pair.a - 1]?.name ?? ''} ${was.events[pair.b - 1]?.name ?? ''}`;
    const same = is.pairs.find((one) => one.a === a && one.b === b);
    // The later is the earlier now: every number of the pair is from the other one on.
    if (!same) found.push({ where: `${where}.first`, was: was.events[pair.a - 1]?.name ?? null, is: was.events[pair.b - 1]?.name ?? null });
    else found.push(...pairChanges(pair, same, codes, boundSigmas).map(([name, changed]) => ({ where: `${where}.${name}`, ...changed })));
  }
  return found.slice(0, MOST_TOLD);
}
