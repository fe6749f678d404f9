import { type Logger } from 'pino';
import { compareInstants } from '#shared/time/instant';
import { type Instant } from '#shared/time/instant';
import { createTaiWriter } from '#shared/time/format';
import { type Outcome, problemOf, valueOf } from '#shared/outcome';
import { type RecordFate, type SiteRecord } from '#shared/contract/site-record';
import { type Db } from '../db';
import { type NetworkInForce } from '../reconcile/network-in-force';
import { keepShippedLeapSeconds } from '../reconcile/tables-in-force';
import { onCommitted } from '../writer/commit';
import { Completeness, type CompletenessSaid } from './completeness';
import { GroupLoop, ofOneRecord, type Waiting } from './group-loop';
import { GroupNotes, type SetAsideReason } from './group-notes';
import { InForce } from './in-force';
import { RecordKeeper, type Verdict } from './record-keeper';
import { type Reprocessed, reprocess, retryDue } from './reprocess';
import { Connections, type Resume } from './resume';
import { FUTURE_BOUND_S, latestAt } from './server-time';
import { type Stored, type StoredListener } from './stored';

/** Most spans of live time that a site may say at once. */
export const MOST_SPANS_SAID = 1_000;

const SYNCHRONOUS_FULL = 2;

/** What the ingest stands on. */
export interface IngestSources {
  /** The only writing connection. */
  readonly db: Db;
  readonly log: Logger;
  /** The server's own clock, ms since 1970. */
  readonly nowMs: () => number;
  readonly listener: StoredListener;
  /** Called once when the database cannot be written any more: everything that waits was answered as unknown, and the process must end. */
  readonly fatal: (fault: unknown) => void;
}

/** What a site is told of one of its records. */
export interface RecordAnswer {
  readonly fate: RecordFate;
  /** Of a set-aside. */
  readonly reason?: SetAsideReason;
  readonly detail?: string;
}

const UNKNOWN: RecordAnswer = { fate: 'unknown' };

/** A site that takes no more records, or its network. */
export class ClosedSite extends Error {}

/** The way of sites' records into the database. All of it runs where the only writing connection is. */
export interface Ingest {
  /** A site's stream begins: where it goes on. @throws ClosedSite */
  readonly hello: (siteId: number, keyId: number | null) => Resume;
  /** A connection has ended. */
  readonly bye: (connectionId: number, why: string) => void;
  /** Takes records in; answers for each, in their order, after the commit that holds it. @throws ClosedSite, as a rejection */
  readonly batch: (siteId: number, records: readonly SiteRecord[]) => Promise<readonly RecordAnswer[]>;
  /**
   * A site says up to when it has sent everything, and when it was live; after the batches that it sent before.
   *
   * @returns up to when it is complete now, once that is committed; or the problem `future`, `span`, `spans`, `unknown`
   */
  readonly complete: (siteId: number, said: CompletenessSaid) => Promise<Outcome<Instant | undefined>>;
  /** Looks again at records whose time has come; to be called every second or so, and at the start. Answers how many stand now. */
  readonly retryDue: () => Promise<number>;
  /** What a network is reconciled by has changed: reads it again, at once, and computes anew what rests on it. Commits that note it are heard. */
  readonly setupChanged: (networkId: number) => Promise<Reprocessed>;
  readonly reprocess: (networkId: number, siteIds: readonly number[]) => Promise<Reprocessed>;
  /** What is in force of a network. */
  readonly network: (networkId: number) => NetworkInForce;
  /** Resolves when nothing waits to be written. */
  readonly whenIdle: () => Promise<void>;
  /** About how many rows wait to be written. */
  readonly waitingRows: () => number;
  /** What decisions on set-asides stand on. */
  readonly parts: IngestParts;
}

/** The parts that decisions share with the stream. */
export interface IngestParts {
  readonly db: Db;
  readonly keeper: RecordKeeper;
  readonly notes: GroupNotes;
  readonly inForce: InForce;
  readonly tell: (stored: Stored) => void;
}

/**
 * Opens the ingest over a writing connection.
 *
 * Connections that a former process left open are ended, and networks whose set-up changed after their last reprocessing are reprocessed, as
 * they are after each commit that notes a change of their set-up.
 *
 * @throws where the connection does not write each commit to the disk before it answers
 */
export function openIngest({ db, log, nowMs, listener, fatal }: IngestSources): Ingest {
  const synchronous = db.$client.pragma('synchronous', { simple: true });
  if (synchronous !== SYNCHRONOUS_FULL)
    throw new Error(`SQLite keeps synchronous at ${String(synchronous)} where ${SYNCHRONOUS_FULL} (FULL) is needed`);
  keepShippedLeapSeconds(db, nowMs());
  const notes = new GroupNotes(db);
  const keeper = new RecordKeeper(db, notes);
  const inForce = new InForce(db);
  const completeness = new Completeness(db);
  const connections = new Connections(db, keeper.books);
  const tell = (stored: Stored): void => {
    try {
      listener.onStored(stored);
    } catch (fault) {
      log.error({ event: 'ingest:listener', err: fault }, 'who is told of stored records failed');
    }
  };
  const takeAlong = (stored: Stored): boolean => listener.takeAlong?.(stored) ?? false;
  const loop = new GroupLoop({ db, keeper, notes, nowMs, log, tell, takeAlong, fatal });
  const sources = { db, keeper, inForce, inGroup };
  connections.endAll('the server ended', nowMs());

  function openSite(siteId: number) {
    const found = inForce.site(siteId);
    if (found.site.isClosed || found.at.network.isClosed) throw new ClosedSite(`the site ${found.site.code} takes no more records`);
    return found;
  }

  function inGroup(rows: number, work: Waiting['work']): Promise<boolean> {
    return new Promise((resolve) => {
      loop.push({
        rows,
        work,
        done: () => resolve(true),
        unknown: () => resolve(false),
        alone: () => [{ work }],
        instead: () => {
          throw new Error('what is no record cannot be set aside');
        },
      });
    });
  }

  function takeOne(siteId: number, record: SiteRecord, now: number): Verdict {
    const { at, site } = inForce.site(siteId);
    return ofOneRecord(() => keeper.take(at, site, record, now));
  }

  function batch(siteId: number, records: readonly SiteRecord[]): Promise<readonly RecordAnswer[]> {
    try {
      openSite(siteId);
    } catch (fault) {
      return Promise.reject(fault instanceof Error ? fault : new Error(String(fault)));
    }
    if (records.length === 0) return Promise.resolve([]);
    const answers: RecordAnswer[] = [];
    const partOf = (record: SiteRecord, index: number): Pick<Waiting, 'work'> => ({
      work: (now) => {
        answers[index] = takeOne(siteId, record, now);
        completeness.heard(siteId, now);
      },
    });
    return new Promise((resolve) => {
      loop.push({
        rows: records.length,
        work: (now) => {
          const { at, site } = inForce.site(siteId);
          for (const [index, record] of records.entries()) answers[index] = ofOneRecord(() => keeper.take(at, site, record, now));
          completeness.heard(siteId, now);
        },
        done: () => resolve(answers),
        unknown: () => resolve(records.map(() => UNKNOWN)),
        alone: () => records.map(partOf),
        instead: (part, now) => {
          const record = records[part];
          const { at, site } = inForce.site(siteId);
          if (record) answers[part] = keeper.takeUnreadable(at, site, record, now);
        },
      });
    });
  }

  async function complete(siteId: number, said: CompletenessSaid): Promise<Outcome<Instant | undefined>> {
    const { at } = openSite(siteId);
    const wrong = faultOfSaid(said, latestAt(nowMs(), at.network.tables.leapSeconds));
    if (wrong) return wrong;
    const isWritten = await inGroup(1 + said.live.length, (now) => {
      completeness.heard(siteId, now);
      if (completeness.say(siteId, said, now) && said.upTo) notes.isComplete(at.network.id, siteId, said.upTo);
    });
    if (!isWritten) return problemOf('unknown', 'upTo', 'nobody knows whether it was stored; it must be said again');
    return valueOf(completeness.upTo(siteId));
  }

  async function setupChanged(networkId: number): Promise<Reprocessed> {
    const { network, changed } = inForce.reload(networkId);
    listener.onInForce(network);
    return reprocess(sources, networkId, changed);
  }

  /** What nobody waits for; the next start does what it left undone. */
  const inItsOwnTime = (work: Promise<unknown>): void =>
    void work.catch((fault: unknown) => log.error({ event: 'ingest:reprocess', err: fault }, 'a reprocessing did not come to its end'));

  onCommitted(db, ({ changes }) => {
    const networkIds = new Set(changes.flatMap(({ kind, networkId }) => (kind === 'setup' ? [networkId] : [])));
    for (const networkId of networkIds) inItsOwnTime(setupChanged(networkId));
  });
  for (const networkId of setupsAhead(db)) {
    const all = inForce.network(networkId).network.sites.map(({ id }) => id);
    inItsOwnTime(reprocess(sources, networkId, all));
  }

  return {
    hello: (siteId, keyId) => {
      openSite(siteId);
      return connections.hello(siteId, keyId, nowMs());
    },
    bye: (connectionId, why) => connections.bye(connectionId, why, nowMs()),
    batch,
    complete,
    retryDue: () => retryDue(sources, nowMs()),
    setupChanged,
    reprocess: (networkId, siteIds) => reprocess(sources, networkId, siteIds),
    network: (networkId) => inForce.network(networkId).network,
    whenIdle: () => loop.whenIdle(),
    waitingRows: () => loop.waitingRows(),
    parts: { db, keeper, notes, inForce, tell },
  };
}

/** Networks whose set-up changed after all that was reprocessed: a process ended between the two. */
function setupsAhead(db: Db): readonly number[] {
  const query = `SELECT c.network_id FROM changes AS c JOIN networks AS n ON n.id = c.network_id WHERE c.kind = 'setup' GROUP BY c.network_id
    HAVING max(c.number) > (SELECT coalesce(max(r.number), 0) FROM changes AS r WHERE r.network_id = c.network_id AND r.kind = 'reprocessed')
    AND EXISTS (SELECT 1 FROM events AS e WHERE e.network_id = c.network_id)`;
  return db.$client.prepare<[], number>(query).pluck().all();
}

/** What is wrong with what a site says of its stream. */
function faultOfSaid({ upTo, live }: CompletenessSaid, latest: Instant): ReturnType<typeof problemOf> | undefined {
  if (live.length > MOST_SPANS_SAID)
    return problemOf('spans', 'live', `are ${live.length} spans; at most ${MOST_SPANS_SAID} are taken at once`);
  const text = createTaiWriter();
  if (upTo && compareInstants(upTo, latest) > 0)
    return problemOf(
      'future',
      'upTo',
      `is ${text(upTo)} TAI; it may be ${FUTURE_BOUND_S} s after the server's clock at most, ${text(latest)} TAI`,
    );
  for (const [index, { from, to }] of live.entries()) {
    if (to && compareInstants(to, from) < 0)
      return problemOf('span', `live[${index}].to`, `is ${text(to)} TAI; it must not be before the span's beginning, ${text(from)} TAI`);
    if (compareInstants(to ?? from, latest) > 0)
      return problemOf(
        'future',
        `live[${index}]`,
        `reaches to ${text(to ?? from)} TAI; it may be ${FUTURE_BOUND_S} s after the server's clock at most`,
      );
  }
  return undefined;
}
