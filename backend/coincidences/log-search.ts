import { type Instant } from '#shared/time/instant';
import { type Db } from '../db';

/** The kind under which the search of a stored log stands among the jobs. */
export const LOG_SEARCH = 'search-log';

/** The search of the whole stored log by a rule's version, from its latest event back. */
export interface LogSearch {
  readonly jobId: number;
  readonly versionId: number;
  /** What begins after this has been searched; undefined before the first step. */
  readonly searchedFrom: Instant | undefined;
}

interface JobRow {
  readonly id: number;
  readonly state: string;
  readonly checkpoint: string | null;
  readonly cancelRequested: number;
}

/** A step takes well below a second; whoever finds a lease older than this may say that the search stands still. */
const LEASE_MS = 60_000;

/** Keeps the searches of stored logs as jobs, so that their state is visible and a restart goes on where they were. */
export class LogSearches {
  private readonly find;
  private readonly insert;
  private readonly advance;
  private readonly finish;
  private readonly cancelOf;

  constructor(
    db: Db,
    private readonly nowMs: () => number,
  ) {
    const { $client: client } = db;
    this.find = client.prepare<[number, string, number], JobRow>(
      `SELECT id, state, checkpoint, cancel_requested AS cancelRequested FROM jobs
       WHERE network_id = ? AND kind = ? AND json_extract(body, '$.ruleVersionId') = ? ORDER BY id DESC LIMIT 1`,
    );
    this.insert = client.prepare(
      `INSERT INTO jobs (network_id, kind, body, only_one, state, run_after_ms, attempts, lease_holder, lease_until_ms, progress_of, created_at_ms,
       started_at_ms) VALUES (?, ?, ?, ?, 'running', ?, 1, 'writer', ?, ?, ?, ?)`,
    );
    this.advance = client.prepare(
      "UPDATE jobs SET lease_until_ms = ?, progress_done = progress_done + ?, checkpoint = ? WHERE id = ? AND state = 'running'",
    );
    this.finish = client.prepare(
      "UPDATE jobs SET state = ?, lease_holder = NULL, lease_until_ms = NULL, ended_at_ms = ? WHERE id = ? AND state = 'running'",
    );
    this.cancelOf = client.prepare(
      `UPDATE jobs SET state = 'cancelled', lease_holder = NULL, lease_until_ms = NULL, ended_at_ms = ?
       WHERE only_one = ? AND state IN ('waiting', 'running')`,
    );
  }

  /** The search of a version as it stands: one that is not done, that it is done (also when it was cancelled), or undefined where it never began. */
  of(networkId: number, versionId: number): LogSearch | 'done' | undefined {
    const row = this.find.get(networkId, LOG_SEARCH, versionId);
    if (!row) return undefined;
    if (row.state !== 'running') return 'done';
    return { jobId: row.id, versionId, searchedFrom: row.checkpoint === null ? undefined : (JSON.parse(row.checkpoint) as Instant) };
  }

  /** Begins a search; it takes the place of the one of the same rule that had not come to its end. */
  begin(networkId: number, { ruleId, versionId }: { readonly ruleId: number; readonly versionId: number }, events: number): LogSearch {
    const nowMs = this.nowMs();
    const body = JSON.stringify({ ruleVersionId: versionId });
    const onlyOne = `${LOG_SEARCH}:${ruleId}`;
    this.cancelOf.run(nowMs, onlyOne);
    const times = [nowMs, nowMs + LEASE_MS, events, nowMs, nowMs];
    const { lastInsertRowid } = this.insert.run(networkId, LOG_SEARCH, body, onlyOne, ...times);
    return { jobId: Number(lastInsertRowid), versionId, searchedFrom: undefined };
  }

  /** A step is done, in the transaction of its results. */
  stepped(search: LogSearch, searchedFrom: Instant, events: number): LogSearch {
    const checkpoint = JSON.stringify({ taiS: searchedFrom.taiS, ps: searchedFrom.ps });
    this.advance.run(this.nowMs() + LEASE_MS, events, checkpoint, search.jobId);
    return { ...search, searchedFrom };
  }

  isCancelled(networkId: number, { versionId }: LogSearch): boolean {
    return this.find.get(networkId, LOG_SEARCH, versionId)?.cancelRequested === 1;
  }

  end({ jobId }: LogSearch, as: 'done' | 'cancelled'): void {
    this.finish.run(as, this.nowMs(), jobId);
  }
}
