import { type Stored } from '../ingest/stored';

/** What commits brought that nobody has searched yet. */
export interface Gathered {
  /** Whether a commit can be taken together with those before it: one that only brought new events. */
  readonly canHold: (stored: Stored) => boolean;
  readonly add: (stored: Stored) => void;
  readonly events: () => number;
  readonly isEmpty: () => boolean;
  /** Each network's, as if one commit had brought it all; nothing is left. */
  readonly take: () => readonly Stored[];
}

const bringsNewEventsAlone = ({ withdrawn, arrived }: Stored): boolean =>
  withdrawn.length === 0 && arrived.every(({ eventVersion }) => eventVersion === 1);

export function gathered(): Gathered {
  let networks = new Map<number, Stored[]>();
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
    take: () => {
      const all = [...networks.values()].map(asOne);
      networks = new Map();
      events = 0;
      return all;
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
