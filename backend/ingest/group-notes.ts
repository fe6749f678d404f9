import { type SET_ASIDE_WORDS } from '#schema/words';
import { type Instant } from '#shared/time/instant';
import { type Tx } from '../writer/commit';
import { type Db } from '../db';
import { nextChange, noteChange } from '../live/note-change';
import { type StoredEvent } from '../reconcile/stored-event';
import { completenessOf } from './completeness';
import { type Stored, type WithdrawnEvent } from './stored';

export type SetAsideReason = (typeof SET_ASIDE_WORDS)[number];

/** What one transaction does to one network. */
interface NetworkNotes {
  readonly changeNumber: number;
  readonly arrived: Map<number, StoredEvent>;
  readonly withdrawn: WithdrawnEvent[];
  /** Counts by site, then reason. */
  readonly setAside: Map<number, Map<SetAsideReason, number>>;
  readonly decided: Set<number>;
  readonly completeSites: Map<number, Instant>;
}

/** How many records of a site were set aside for one reason. */
export interface SetAsideCount {
  readonly networkId: number;
  readonly siteId: number;
  readonly reason: SetAsideReason;
  readonly records: number;
}

/** Gathers what a transaction does to each network: the numbers of its changes, and what the finder is told after the commit. */
export class GroupNotes {
  private readonly networks = new Map<number, NetworkNotes>();
  private readonly counts: SetAsideCount[] = [];

  constructor(private readonly db: Db) {}

  /** The number that the change of this transaction's events will have. */
  changeNumber(networkId: number): number {
    return this.of(networkId).changeNumber;
  }

  came(networkId: number, event: StoredEvent): void {
    this.of(networkId).arrived.set(event.triggerId, event);
  }

  /** An event that came in this very transaction never was, to those who hear of it after. */
  went(networkId: number, event: WithdrawnEvent): void {
    const notes = this.of(networkId);
    if (!notes.arrived.delete(event.triggerId)) notes.withdrawn.push(event);
  }

  wasSetAside(networkId: number, siteId: number, reason: SetAsideReason): void {
    const { setAside } = this.of(networkId);
    const reasons = setAside.get(siteId) ?? new Map<SetAsideReason, number>();
    reasons.set(reason, (reasons.get(reason) ?? 0) + 1);
    setAside.set(siteId, reasons);
  }

  wasDecided(networkId: number, setAsideId: number): void {
    this.of(networkId).decided.add(setAsideId);
  }

  isComplete(networkId: number, siteId: number, upTo: Instant): void {
    this.of(networkId).completeSites.set(siteId, upTo);
  }

  /** Numbers the changes, and answers what is to be told once they are committed. */
  write(tx: Tx, nowMs: number): readonly Stored[] {
    const told: Stored[] = [];
    for (const [networkId, notes] of this.networks) {
      const arrived = [...notes.arrived.values()];
      const hasEvents = arrived.length + notes.withdrawn.length > 0;
      if (hasEvents) {
        const number = noteChange(tx, networkId, 'records', recordsBody(arrived, notes.withdrawn), nowMs);
        if (number !== notes.changeNumber) throw new Error(`change ${number} of network ${networkId} was to be ${notes.changeNumber}`);
      }
      if (notes.setAside.size + notes.decided.size > 0) noteChange(tx, networkId, 'set-aside', setAsideBody(notes), nowMs);
      if (notes.completeSites.size > 0) noteChange(tx, networkId, 'completeness', completenessBody(notes), nowMs);
      if (hasEvents || notes.completeSites.size > 0)
        told.push({
          networkId,
          changeNumber: hasEvents ? notes.changeNumber : 0,
          arrived,
          withdrawn: notes.withdrawn,
          completeUpTo: completenessOf(this.db, networkId),
        });
    }
    for (const [networkId, { setAside }] of this.networks)
      for (const [siteId, reasons] of setAside)
        for (const [reason, records] of reasons) this.counts.push({ networkId, siteId, reason, records });
    this.networks.clear();
    return told;
  }

  /** What was set aside since it was last asked, by network, site and reason. */
  takeSetAside(): readonly SetAsideCount[] {
    return this.counts.splice(0);
  }

  forget(): void {
    this.networks.clear();
    this.counts.length = 0;
  }

  private of(networkId: number): NetworkNotes {
    const known = this.networks.get(networkId);
    if (known) return known;
    const made: NetworkNotes = {
      changeNumber: nextChange(this.db, networkId),
      arrived: new Map(),
      withdrawn: [],
      setAside: new Map(),
      decided: new Set(),
      completeSites: new Map(),
    };
    this.networks.set(networkId, made);
    return made;
  }
}

/** Ids beyond this are told as their range alone. */
const MOST_IDS_TOLD = 1_000;

const range = (ids: readonly number[]): { readonly from: number; readonly to: number } | undefined =>
  ids.length === 0 ? undefined : { from: ids.reduce((a, b) => Math.min(a, b)), to: ids.reduce((a, b) => Math.max(a, b)) };

function recordsBody(arrived: readonly StoredEvent[], withdrawn: readonly WithdrawnEvent[]): object {
  const sites: Record<number, number> = {};
  for (const { siteId } of arrived) sites[siteId] = (sites[siteId] ?? 0) + 1;
  const gone = withdrawn.map(({ triggerId }) => triggerId);
  return {
    triggers: range(arrived.map(({ triggerId }) => triggerId)),
    count: arrived.length,
    sites,
    ...(gone.length === 0 ? {} : { withdrawn: gone.length > MOST_IDS_TOLD ? range(gone) : gone }),
  };
}

const setAsideBody = ({ setAside, decided }: NetworkNotes): object => ({
  sites: Object.fromEntries([...setAside].map(([siteId, reasons]) => [siteId, Object.fromEntries(reasons)])),
  ...(decided.size === 0 ? {} : { decided: [...decided].slice(0, MOST_IDS_TOLD) }),
});

const completenessBody = ({ completeSites }: NetworkNotes): object => ({ sites: Object.fromEntries(completeSites) });
