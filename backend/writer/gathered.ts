import { type Stored } from '../ingest/stored';

/** What commits brought that nobody has searched yet. */
export interface Gathered {
  /** Whether a commit can be taken together with those before it: one that only brought new events. */
  readonly canHold: (stored: Stored) => boolean;
  readonly add: (stored: Stored) => void;
  readonly events: () => number;
  readonly isEmpty: () => boolean;
  /** The oldest, until there are so many events: each network's as if one commit had brought it all. */
  readonly take: (mostEvents: number) => readonly Stored[];
}

const bringsNewEventsAlone = ({ withdrawn, arrived }: Stored): boolean =>
  withdrawn.length === 0 && arrived.every(({ eventVersion }) => eventVersion === 1);

export function gathered(): Gathered {
  const networks = new Map<number, Stored[]>();
  let events = 0;
  return {
    canHold: bringsNewEventsAlone,
    add: (stored) => {
      const commits = networks.get(stored.networkId);
      if (commits) commits.push(stored);
      else networks.set(stored.networkId, [stored]);
      events += stored.arrived.length;
    },
    events: () => events,
    isEmpty: () => networks.size === 0,
    take: (mostEvents) => {
      const taken = new Map<number, Stored[]>();
      let count = 0;
      for (const [networkId, commits] of networks) {
        const until = commits.findIndex(({ arrived }) => (count += arrived.length) >= mostEvents);
        taken.set(networkId, until < 0 ? commits : commits.splice(0, until + 1));
        if (until < 0 || commits.length === 0) networks.delete(networkId);
        if (until >= 0) break;
      }
      events -= count;
      return [...taken.values()].map(asOne);
    },
  };
}

function asOne(commits: readonly Stored[]): Stored {
  const [first] = commits;
  const last = commits.at(-1);
  if (!first || !last) throw new Error('a network without a commit was gathered');
  if (commits.length === 1) return first;
  return {
    networkId: first.networkId,
    changeNumber: commits.reduce((most, { changeNumber }) => Math.max(most, changeNumber), 0), // 0 for those that brought no event
    arrived: commits.flatMap(({ arrived }) => arrived),
    withdrawn: [],
    completeUpTo: last.completeUpTo,
  };
}
