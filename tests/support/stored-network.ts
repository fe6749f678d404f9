import { cpSync } from 'node:fs';
import { compareText } from '#shared/compare-text';
import { type CoincidenceRule } from '#shared/coincidence/rule';
import { pairOf } from '#shared/relativity/pair';
import { verdictOf } from '#shared/relativity/verdict';
import { type Instant } from '#shared/time/instant';
import { LIVE_CROWD_LIMIT } from '../../backend/coincidences/active-rule';
import { setName } from '../../backend/command/coincidence-tables';
import { NetworkSearch } from '../../backend/coincidences/network-search';
import { type StoredLog } from '../../backend/coincidences/stored-log';
import { closeDb, databaseFile, type Db, openDb } from '../../backend/db';
import { type Stored, type WithdrawnEvent } from '../../backend/ingest/stored';
import { noteChange } from '../../backend/live/note-change';
import { type StoredEvent } from '../../backend/reconcile/stored-event';
import { commit } from '../../backend/writer/commit';
import { newFolder } from './folder';
import { identityOf, instantAt, liveEvent } from './live-stream';
import {
  BASE_S,
  batchFindings,
  columnsOf,
  errorTablesOf,
  frameAt,
  inOrder,
  linesOf,
  type PlainEvent,
  type PlainNetwork,
} from './plain-coincidences';

const AT = '2026-03-01T00:00:00.000Z';
const HASH = Buffer.alloc(32, 1);
const NETWORK = 1;

/** What a rule says besides its window. */
export interface RuleExtras {
  readonly deadTimeNs?: number;
  readonly leastAmplitude?: number;
  readonly siteIds?: readonly number[];
  readonly exclusions?: readonly { readonly siteId: number | null; readonly from: Instant; readonly to: Instant }[];
}

let empty: string | undefined;

/** A folder with an empty database, migrated once for all. */
function newDatabase(): string {
  if (empty === undefined) {
    empty = newFolder('coincidences-empty');
    closeDb(openDb(empty));
  }
  const folder = newFolder('coincidences');
  cpSync(databaseFile(empty), databaseFile(folder));
  return folder;
}

/** A standing event and the plain one that it was made from. */
interface Standing {
  readonly plain: PlainEvent;
  readonly stored: StoredEvent;
}

/**
 * A plain network in a database of its own: events are stored by plain rows, as an ingest commit leaves them, and found by the product's search.
 */
export class StoredNetwork {
  readonly folder = newDatabase();
  db: Db;
  /** What stands, by trigger. */
  readonly standing = new Map<number, Standing>();
  private readonly triggerOf = new Map<string, number>();
  private readonly versions = new Map<string, StoredEvent>();
  private complete: Instant | undefined;
  private search: NetworkSearch | undefined;
  private rules = 0;

  constructor(
    readonly network: PlainNetwork,
    extras: RuleExtras = {},
  ) {
    this.db = openDb(this.folder);
    this.db.$client.exec(`
      INSERT INTO networks (id, code, name, origin_tai_s, origin_ps, created_at) VALUES (${NETWORK}, 'net', 'Net', ${BASE_S}, 0, '${AT}');
      INSERT INTO runs (id, network_id, code, name, from_tai_s, from_ps, created_at) VALUES (1, ${NETWORK}, 'run', '', ${BASE_S}, 0, '${AT}');
      INSERT INTO leap_second_tables (id, body, sha1, updated_tai_s, expires_tai_s, is_in_force, created_at)
        VALUES (1, '#', '${'0'.repeat(40)}', 0, ${2 * BASE_S}, 1, '${AT}');
      INSERT INTO frames (id, network_id, code, name, created_at) VALUES (1, ${NETWORK}, 'moving', '', '${AT}');
    `);
    network.sites.forEach((site, row) => {
      this.db.$client.exec(`
        INSERT INTO sites (id, network_id, code, name, created_at) VALUES (${row + 1}, ${NETWORK}, 'S${row}', '', '${AT}');
        INSERT INTO site_versions (id, site_id, number, scale, exact_clock, position_kind, itrs_x_m, itrs_y_m, itrs_z_m, position_sigma_m, delay_ns,
          delay_sigma_ns, origin, created_at)
          VALUES (${row + 1}, ${row + 1}, 1, 'TAI', 1, 'itrs', 0, 0, 0, ${site.positionSigmaM}, 0, ${site.delaySigmaNs}, 'survey', '${AT}');
        INSERT INTO groundings (id, site_version_id, run_id, leap_second_table_id) VALUES (${row + 1}, ${row + 1}, 1, 1);
      `);
    });
    this.stateRule(network.rule, extras);
  }

  /** Puts a rule in force in the place of the former one. */
  stateRule({ code, minimumFold, sigmas, window }: CoincidenceRule, extras: RuleExtras = {}): void {
    const version = ++this.rules;
    const { $client: client } = this.db;
    client
      .prepare('INSERT OR IGNORE INTO rules (id, network_id, code, name, is_active, created_at) VALUES (1, ?, ?, ?, 1, ?)')
      .run(NETWORK, code, '', AT);
    client.prepare('UPDATE rule_versions SET superseded_at = ? WHERE superseded_at IS NULL').run(AT);
    client
      .prepare(
        `INSERT INTO rule_versions (id, rule_id, number, minimum_fold, sigmas, window_kind, speed_c, margin_ns, width_ns, frame_id, least_amplitude,
         dead_time_ns, crowd_limit, created_at) VALUES (?, 1, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
      )
      .run(
        ...[version, version, minimumFold, sigmas, window.kind],
        ...(window.kind === 'light-time'
          ? [window.speedC, window.marginNs, null, null]
          : [null, null, window.widthNs, window.frame === 'moving' ? 1 : null]),
        ...[extras.leastAmplitude ?? null, extras.deadTimeNs ?? 0, this.network.limit, AT],
      );
    for (const siteId of extras.siteIds ?? []) client.prepare('INSERT INTO rule_sites VALUES (?, ?)').run(version, siteId);
    for (const { siteId, from, to } of extras.exclusions ?? [])
      client
        .prepare(
          "INSERT INTO rule_exclusions (rule_version_id, site_id, from_tai_s, from_ps, to_tai_s, to_ps, reason) VALUES (?, ?, ?, ?, ?, ?, '')",
        )
        .run(version, siteId, from.taiS, from.ps, to.taiS, to.ps);
    this.search?.rulesChanged();
  }

  get opened(): NetworkSearch {
    this.search ??= new NetworkSearch({ db: this.db, nowMs: () => 0, networkId: NETWORK }, this.log(), this.complete);
    return this.search;
  }

  /** The process dies between two transactions: all that it held is gone. */
  kill(): void {
    this.search = undefined;
    this.db.$client.close();
    this.db = openDb(this.folder);
  }

  close(): void {
    this.search = undefined;
    this.db.$client.close();
  }

  /** Does all that is left to do. */
  finish(): void {
    for (let steps = 0; this.opened.step(); steps++) if (steps > 10_000) throw new Error('there is no end of steps');
  }

  /** Stores events as one commit, and tells the search of it unless the process dies before. */
  put(events: readonly PlainEvent[], amplitudeOf: (event: PlainEvent) => number = () => NaN): Stored {
    return this.storing((change) => {
      const arrived: StoredEvent[] = [];
      const withdrawn: WithdrawnEvent[] = [];
      for (const event of events) {
        const known = this.find(event);
        if (known?.plain.atPs === event.atPs && known.plain.readingSigmaNs === event.readingSigmaNs) continue;
        const stored = known
          ? {
              ...this.made(event, amplitudeOf),
              triggerId: known.stored.triggerId,
              eventVersion: this.lastVersion(known.stored.triggerId) + 1,
            }
          : { ...this.made(event, amplitudeOf), triggerId: this.addTrigger(event), eventVersion: 1 };
        if (known) this.keepVersion(known.stored, change);
        this.writeEvent(stored, change, known ? 'again' : 'new');
        this.standing.set(stored.triggerId, { plain: event, stored });
        this.triggerOf.set(nameOf(event), stored.triggerId);
        arrived.push(stored);
      }
      return { arrived: [...new Map(arrived.map((event) => [event.triggerId, event])).values()], withdrawn };
    });
  }

  /** Takes events away as one commit. */
  withdraw(events: readonly PlainEvent[]): Stored {
    return this.storing((change) => {
      const withdrawn: WithdrawnEvent[] = [];
      for (const event of events) {
        const known = this.find(event);
        if (!known) continue;
        this.keepVersion(known.stored, change);
        this.db.$client.prepare('DELETE FROM events WHERE trigger_id = ?').run(known.stored.triggerId);
        this.standing.delete(known.stored.triggerId);
        const { triggerId, siteId, site, series, sequence } = known.stored;
        withdrawn.push({ triggerId, siteId, site, series, sequence });
      }
      return { arrived: [], withdrawn };
    });
  }

  /** All sites say that they have sent everything before an instant. */
  completeUpTo(atPs: number): Stored {
    this.complete = instantAt(atPs);
    return { networkId: NETWORK, changeNumber: 0, arrived: [], withdrawn: [], completeUpTo: this.complete };
  }

  private storing(work: (change: number) => Pick<Stored, 'arrived' | 'withdrawn'>): Stored {
    return commit(this.db, (tx) => {
      const change = 1 + this.db.$client.prepare<[], number>('SELECT last FROM change_heads').pluck().get()!;
      const done = work(change);
      const hasEvents = done.arrived.length + done.withdrawn.length > 0;
      if (hasEvents) noteChange(tx, NETWORK, 'records', {}, 0);
      return { networkId: NETWORK, changeNumber: hasEvents ? change : 0, ...done, completeUpTo: this.complete };
    });
  }

  private find(event: PlainEvent): Standing | undefined {
    const triggerId = this.triggerOf.get(nameOf(event));
    return triggerId === undefined ? undefined : this.standing.get(triggerId);
  }

  private made(event: PlainEvent, amplitudeOf: (event: PlainEvent) => number): Omit<StoredEvent, 'triggerId' | 'eventVersion'> {
    return {
      ...liveEvent(this.network, event),
      siteId: event.site + 1,
      version: event.site,
      kind: 'trigger',
      sigmaSource: 'record',
      amplitude: amplitudeOf(event),
    };
  }

  /** A second content under an identity is a row of its own. */
  private addTrigger({ site, series, sequence }: PlainEvent): number {
    const { lastInsertRowid } = this.db.$client
      .prepare(
        `INSERT INTO triggers (site_id, series, sequence, variant, kind, reading, reading_form, sigma, amplitude, content_hash, received_at_ms)
         VALUES (@site, @series, @sequence, (SELECT count(*) FROM triggers WHERE site_id = @site AND series = @series AND sequence = @sequence),
         'trigger', 'x', 'iso', '', '', @hash, 0)`,
      )
      .run({ site: site + 1, series, sequence: `${sequence}`, hash: HASH });
    return Number(lastInsertRowid);
  }

  private lastVersion(triggerId: number): number {
    const kept = this.db.$client.prepare<[number], number | null>('SELECT max(version) FROM event_versions WHERE trigger_id = ?').pluck();
    return Math.max(kept.get(triggerId) ?? 0, this.standing.get(triggerId)?.stored.eventVersion ?? 0);
  }

  private keepVersion({ triggerId, eventVersion }: StoredEvent, change: number): void {
    this.db.$client
      .prepare(
        `INSERT INTO event_versions SELECT trigger_id, grounding_id, tai_s, ps, x_m, y_m, z_m, reading_sigma_ns, sigma_origin, sigma_ns,
         since_epoch_days, amplitude, version, change_number, row_hash, ? FROM events WHERE trigger_id = ? AND version = ?`,
      )
      .run(change, triggerId, eventVersion);
  }

  private writeEvent(e: StoredEvent, change: number, as: 'new' | 'again'): void {
    this.versions.set(`${e.triggerId} ${e.eventVersion}`, e);
    const amplitude = Number.isNaN(e.amplitude) ? null : e.amplitude;
    const numbers = [e.taiS, e.ps, e.xM, e.yM, e.zM, e.readingSigmaNs, e.sigmaNs, e.sinceEpochDays, amplitude, e.eventVersion, change];
    if (as === 'new')
      this.db.$client
        .prepare(
          `INSERT INTO events (trigger_id, network_id, site_id, kind, grounding_id, tai_s, ps, x_m, y_m, z_m, reading_sigma_ns, sigma_origin, sigma_ns,
           since_epoch_days, amplitude, version, change_number, row_hash) VALUES (?, ?, ?, 'trigger', ?, ?, ?, ?, ?, ?, ?, 'record', ?, ?, ?, ?, ?, ?)`,
        )
        .run(e.triggerId, NETWORK, e.siteId, e.siteId, ...numbers, HASH);
    else
      this.db.$client
        .prepare(
          `UPDATE events SET tai_s = ?, ps = ?, x_m = ?, y_m = ?, z_m = ?, reading_sigma_ns = ?, sigma_ns = ?, since_epoch_days = ?, amplitude = ?,
           version = ?, change_number = ? WHERE trigger_id = ?`,
        )
        .run(...numbers, e.triggerId);
  }

  /** The rows tell which events stand where; what no column holds is remembered from when they were made. */
  private log(): StoredLog {
    const read = this.db.$client.prepare<[number, number, number, number, number], { id: number; version: number }>(
      `SELECT trigger_id AS id, version FROM events WHERE network_id = ? AND (tai_s, ps) >= (?, ?) AND (tai_s, ps) <= (?, ?)`,
    );
    const { network } = this;
    return {
      ground: {
        ...linesOf(network),
        siteCodes: network.sites.map((_, row) => `S${row}`),
        errors: errorTablesOf(network),
        velocityAt: (_frame, { taiS, ps }) => {
          const [x = 0, y = 0, z = 0] = frameAt(network, (taiS - BASE_S) * 1e12 + ps);
          return { gamma: Math.sqrt(1 + Math.hypot(x, y, z) ** 2), gammaBeta: [x, y, z] as const };
        },
      },
      between: (from, to) =>
        read.all(NETWORK, from.taiS, from.ps, to.taiS, to.ps).map(({ id, version }) => this.versions.get(`${id} ${version}`)!),
    };
  }
}

const nameOf = (event: PlainEvent): string => {
  const { site, series, sequence } = identityOf(event);
  return series === '' ? `S${site}:${sequence}` : `S${site}:${series}:${sequence}`;
};

/** Everything that the tables say is in force, in words. */
export interface InForce {
  readonly sets: readonly string[];
  readonly crowds: readonly string[];
}

interface PairRow {
  id: number;
  dt_ns: number;
  distance_m: number;
  sigma_dt_ns: number;
  margin_sigma: number;
  class: string;
}

const pairText = (p: Omit<PairRow, 'id'>): string => [p.dt_ns, p.distance_m, p.sigma_dt_ns, p.margin_sigma, p.class].join(' ');

/** What the tables hold. */
export function inForce(db: Db): InForce {
  const sets = db.$client
    .prepare<[], { id: number; name: string; fold: number; members: string }>(
      `SELECT c.id, substr(c.set_hash, 1, 12) AS name, c.fold, (SELECT group_concat(t.trigger_id, ' ') FROM
       (SELECT trigger_id FROM members WHERE coincidence_id = c.id ORDER BY place) t) AS members FROM coincidences c WHERE c.is_current = 1`,
    )
    .all();
  const pairs = db.$client.prepare<[number], PairRow>('SELECT * FROM pairs WHERE coincidence_id = ? ORDER BY a, b');
  const crowds = db.$client
    .prepare<[], { triggerId: number; sites: number; events: number; least: number }>(
      'SELECT trigger_id AS triggerId, sites, events, sets_at_least AS least FROM crowded_events',
    )
    .all();
  return {
    sets: sets.map(({ id, name, members }) => [name, members, ...pairs.all(id).map(pairText)].join(' | ')).sort(compareText),
    crowds: crowds.map((crowd) => Object.values(crowd).join(' ')).sort(compareText),
  };
}

/** What the batch finder says of standing events, in the same words. */
export function batchInForce(network: PlainNetwork, all: Iterable<Standing>, rule = network.rule): InForce {
  const standing = [...all];
  const byName = new Map(standing.map(({ plain, stored }) => [nameOf(plain), stored.triggerId]));
  const sorted = inOrder(standing.map(({ plain }) => plain));
  const used = { ...network, rule, limit: Math.min(network.limit, LIVE_CROWD_LIMIT) };
  const { sets, crowds } = batchFindings(used, sorted);
  const columns = columnsOf(network, sorted);
  const errors = errorTablesOf(network);
  const triggerOf = (row: number): number => byName.get(nameOf(sorted[row]!))!;
  const textOf = (rows: readonly number[]): string => {
    const pairs: string[] = [];
    rows.forEach((a, at) => {
      for (const b of rows.slice(at + 1)) {
        const pair = pairOf(columns, errors, a, b);
        const { marginSigma, class: said } = verdictOf(pair, rule.sigmas);
        const { dtNs: dt_ns, distanceM: distance_m, sigmaDtNs: sigma_dt_ns } = pair;
        pairs.push(pairText({ dt_ns, distance_m, sigma_dt_ns, margin_sigma: marginSigma, class: said }));
      }
    });
    const name = setName(
      rule.code,
      rows.map((row) => nameOf(sorted[row]!)),
    );
    return [name, rows.map(triggerOf).join(' '), ...pairs].join(' | ');
  };
  return {
    sets: sets.map(textOf).sort(compareText),
    crowds: crowds
      .map(({ event, sites, events, setsAtLeast }) => [triggerOf(event), sites, events, setsAtLeast].join(' '))
      .sort(compareText),
  };
}

/** How many sets in force are in each state. */
export function states(db: Db): Record<string, number> {
  const rows = db.$client.prepare<[], { state: string; n: number }>('SELECT state, count(*) AS n FROM coincidences GROUP BY state').all();
  return Object.fromEntries(rows.map(({ state, n }) => [state, n]));
}
