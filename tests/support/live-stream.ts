import { type EventIdentity, identityText } from '#shared/coincidence/event-identity';
import { type LiveEvent } from '#shared/coincidence/held-events';
import { type LiveChanges, type LiveCrowd, type LiveSet } from '#shared/coincidence/live-answers';
import { createLiveFinder, type LiveFinder, type LiveSetup } from '#shared/coincidence/live-finder';
import { type Instant } from '#shared/time/instant';
import {
  BASE_S,
  batchFindings,
  boundsOf,
  columnsOf,
  errorTablesOf,
  frameAt,
  hasMovingFrame,
  inOrder,
  type PlainEvent,
  type PlainNetwork,
} from './plain-coincidences';

export const instantAt = (atPs: number): Instant => ({ taiS: BASE_S + Math.floor(atPs / 1e12), ps: atPs - Math.floor(atPs / 1e12) * 1e12 });

export const identityOf = ({ site, series, sequence }: PlainEvent): EventIdentity => ({ site, series, sequence: `${sequence}` });

/** An event as the live finder takes it. */
export function liveEvent(network: PlainNetwork, event: PlainEvent): LiveEvent {
  const e = columnsOf(network, [event]);
  const at = (column: ArrayLike<number>): number => column[0]!;
  return {
    ...identityOf(event),
    taiS: at(e.taiS),
    ps: at(e.ps),
    xM: at(e.xM),
    yM: at(e.yM),
    zM: at(e.zM),
    readingSigmaNs: at(e.readingSigmaNs),
    sigmaNs: at(e.sigmaNs),
    segment: at(e.segment),
    sinceEpochDays: at(e.sinceEpochDays),
    sinceEpochRestDays: at(e.sinceEpochRestDays),
  };
}

export function liveFinderOf(network: PlainNetwork, more: Partial<LiveSetup> = {}): LiveFinder {
  const windowVelocityAt = ({ taiS, ps }: Instant) => {
    const [x = 0, y = 0, z = 0] = frameAt(network, (taiS - BASE_S) * 1e12 + ps);
    return { gamma: Math.sqrt(1 + Math.hypot(x, y, z) ** 2), gammaBeta: [x, y, z] as const };
  };
  return createLiveFinder({
    errors: errorTablesOf(network),
    rule: network.rule,
    bounds: boundsOf(network),
    limit: network.limit,
    windowVelocityAt: hasMovingFrame(network.rule) ? windowVelocityAt : undefined,
    ...more,
  });
}

const textOfSet = (set: LiveSet): string => set.events.map(identityText).join(' ');
const textOfCrowd = (c: LiveCrowd): string => `${identityText(c.event)} ${c.sites} ${c.events} ${c.setsAtLeast}`;

/** What a listener to the changes believes: each change must fit what went before. */
export class Ledger {
  readonly sets = new Set<string>();
  readonly crowds = new Set<string>();
  readonly finalSets = new Set<string>();
  readonly finalCrowds = new Set<string>();
  /** What did not fit. */
  readonly faults: string[] = [];

  enter({ appeared, vanished, final }: LiveChanges): void {
    for (const text of vanished.sets.map(textOfSet)) this.remove(this.sets, this.finalSets, text);
    for (const text of vanished.crowded.map(textOfCrowd)) this.remove(this.crowds, this.finalCrowds, text);
    for (const text of appeared.sets.map(textOfSet)) this.add(this.sets, text);
    for (const text of appeared.crowded.map(textOfCrowd)) this.add(this.crowds, text);
    for (const text of final.sets.map(textOfSet)) this.close(this.sets, this.finalSets, text);
    for (const text of final.crowded.map(textOfCrowd)) this.close(this.crowds, this.finalCrowds, text);
  }

  private add(open: Set<string>, text: string): void {
    if (open.has(text)) this.faults.push(`appeared twice: ${text}`);
    open.add(text);
  }

  private remove(open: Set<string>, final: Set<string>, text: string): void {
    if (!open.delete(text)) this.faults.push(`vanished without having been there: ${text}`);
    if (final.has(text)) this.faults.push(`vanished though final: ${text}`);
  }

  private close(open: Set<string>, final: Set<string>, text: string): void {
    if (!open.has(text)) this.faults.push(`final without being there: ${text}`);
    if (final.has(text)) this.faults.push(`final twice: ${text}`);
    final.add(text);
  }
}

/** What the batch finder says of events in any order, in the words of a ledger. */
export function batchTexts(network: PlainNetwork, events: readonly PlainEvent[]): { sets: string[]; crowds: string[] } {
  const sorted = inOrder(events);
  const nameOf = (row: number): EventIdentity => identityOf(sorted[row]!);
  const { sets, crowds } = batchFindings(network, sorted);
  return {
    sets: sets.map((rows) => textOfSet({ events: rows.map(nameOf), fold: rows.length })).sort(),
    crowds: crowds.map((crowd) => textOfCrowd({ ...crowd, event: nameOf(crowd.event) })).sort(),
  };
}
