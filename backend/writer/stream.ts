import { CoincidenceSearch } from '../coincidences/coincidence-search';
import { type Ground } from '../ground';
import { type Ingest, openIngest } from '../ingest/ingest';
import { MOST_GROUP_ROWS } from '../ingest/group-loop';
import { keepParts } from '../ingest/parts-of';
import { type Stored } from '../ingest/stored';
import { networks } from '#schema/schema';
import { ingestDesk } from '../sites-gate/ingest-desk';
import { gathered } from './gathered';
import { type Answers } from './questions';

const LOOK_FOR_DUE_MS = 1_000; // readings of the future, whose time has come
const MOST_AT_ONCE = 4 * MOST_GROUP_ROWS; // events that are searched together
/** Events that wait for the search while more wait to be stored than a transaction takes: what a site catches up with is stored first. */
const MOST_GATHERED = 32 * MOST_GROUP_ROWS;

/** Events whose search goes into their own transaction: so few that nobody waits long for their answer, and one commit costs more than it. */
const MOST_ALONG = 100;

/** The way of records in the writer thread: from what a site sends to coincidences. */
export interface Stream {
  readonly answers: Pick<Answers, 'site:hello' | 'site:batch' | 'site:state' | 'site:bye'>;
  /** Waits for what is being written. */
  readonly close: () => Promise<void>;
}

/**
 * Opens the stream: the ingest, and behind it the search of coincidences, which first catches up with what was stored.
 *
 * @param ground of the writer thread
 * @param fatal ends the process: what was to be written is not known to be kept
 */
export function openStream(ground: Ground, fatal: (fault: unknown) => void): Stream {
  const { db, log, nowMs } = ground;
  const unsearched = gathered();
  const rest = restOf(() => {
    if (unsearched.events() > 0 && unsearched.events() < MOST_GATHERED && ingest.waitingRows() >= MOST_GROUP_ROWS) return true;
    return searchGathered() || search.step();
  }, fatal);
  // The two need each other: the search reads by the ingest's tables, the ingest tells the search. Under load sites have their answers before the
  // search; while nothing waits it goes along in the transaction of the records, which saves a commit, and with it time for everybody.
  const listener = {
    onStored: (stored: Stored): void => {
      if (unsearched.canHold(stored)) unsearched.add(stored);
      else {
        searchAllGathered();
        searchOne(stored);
      }
      rest.wake();
    },
    takeAlong: (stored: Stored): boolean => {
      if (stored.arrived.length > MOST_ALONG || !unsearched.isEmpty() || !unsearched.canHold(stored)) return false;
      searchOne(stored);
      rest.wake();
      return true;
    },
    onInForce: (network: Parameters<CoincidenceSearch['onInForce']>[0]): void => {
      searchAllGathered(); // it was computed by what was in force
      search.onInForce(network);
      rest.wake();
    },
  };

  /** A piece of it; answers whether there was anything. */
  function searchGathered(): boolean {
    const some = unsearched.take(MOST_AT_ONCE);
    for (const stored of some) searchOne(stored);
    return some.length > 0;
  }

  function searchAllGathered(): void {
    while (searchGathered());
  }

  function searchOne(stored: Stored): void {
    try {
      search.onStored(stored);
    } catch (fault) {
      log.error({ event: 'search:failed', err: fault }, 'the search of coincidences failed and begins anew');
    }
  }

  const search: CoincidenceSearch = new CoincidenceSearch({ db, nowMs, networkOf: (networkId) => ingest.network(networkId) });
  const ingest: Ingest = openIngest({ db, log, nowMs, listener, fatal });
  keepParts(db, ingest.parts);
  for (const { id } of db.select({ id: networks.id }).from(networks).all()) search.start(id);
  ground.onCommitted(({ changes }) => {
    for (const { kind, networkId } of changes) {
      if (kind !== 'rule') continue;
      searchAllGathered();
      search.rulesChanged(networkId);
    }
    if (changes.length > 0) rest.wake();
  });
  rest.wake();
  let looking = false;
  const due = setInterval(() => {
    if (looking) return;
    looking = true;
    void ingest
      .retryDue()
      .catch((fault: unknown) => log.error({ event: 'ingest:retry', err: fault }, 'records whose time has come were not looked at'))
      .finally(() => (looking = false));
  }, LOOK_FOR_DUE_MS);
  const desk = ingestDesk(ingest);
  return {
    answers: {
      'site:hello': ({ sender, software }) => desk.hello(sender, software),
      'site:batch': ({ sender, records }) => desk.batch(sender, records),
      'site:state': ({ sender, state }) => desk.state(sender, state),
      'site:bye': async ({ connectionId, why }) => {
        await desk.bye(connectionId, why);
        return undefined;
      },
    },
    close: async () => {
      clearInterval(due);
      rest.end();
      await ingest.whenIdle();
      searchAllGathered();
    },
  };
}

/** Does what nobody waits for, a bounded piece at a time, and lets whoever asks something in between two of them. */
function restOf(step: () => boolean, fatal: (fault: unknown) => void) {
  let waiting: NodeJS.Immediate | undefined;
  let ended = false;
  const wake = (): void => {
    if (waiting || ended) return;
    waiting = setImmediate(() => {
      waiting = undefined;
      try {
        if (step()) wake();
      } catch (fault) {
        fatal(fault);
      }
    });
  };
  return {
    wake,
    end: (): void => {
      ended = true;
      clearImmediate(waiting);
    },
  };
}
