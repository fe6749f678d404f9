import { KINDS, SIGMA_SOURCES } from '#shared/reconcile/record';
import { type Db } from '../db';
import { type MadeEvent } from '../reconcile/event-maker';
import { type NetworkInForce } from '../reconcile/network-in-force';
import { type StoredEvent } from '../reconcile/stored-event';
import { type Counted, EventTallies } from './event-tallies';
import { Groundings } from './groundings';
import { type GroupNotes } from './group-notes';
import { eventRowHash } from './hashes';

/** The row of an event that stands, so far as it is looked at before it goes or is computed anew. */
interface StandingRow {
  trigger_id: number;
  network_id: number;
  site_id: number;
  kind: 'trigger' | 'reference' | 'test';
  grounding_id: number;
  tai_s: number;
  ps: number;
  x_m: number;
  y_m: number;
  z_m: number;
  reading_sigma_ns: number;
  sigma_origin: string;
  sigma_ns: number;
  since_epoch_days: number;
  amplitude: number | null;
  version: number;
  series: string;
  sequence: string;
}

const NUMBER_COLUMNS = `grounding_id, tai_s, ps, x_m, y_m, z_m, reading_sigma_ns, sigma_origin, sigma_ns, since_epoch_days, amplitude, version,
  change_number, row_hash`;

const countedOf = (row: StandingRow): Counted => ({
  siteId: row.site_id,
  kind: row.kind,
  taiS: row.tai_s,
  sigmaNs: row.sigma_ns,
  amplitude: row.amplitude ?? NaN,
});

/** A trigger whose event is to stand. */
export interface StandingTrigger {
  readonly triggerId: number;
  readonly siteId: number;
}

/** Writes the events that stand, keeps what they were, and counts them. */
export class EventStore {
  private readonly tallies: EventTallies;
  private readonly groundings: Groundings;
  private readonly insert;
  private readonly update;
  private readonly keepVersion;
  private readonly remove;
  private readonly standing;
  private readonly lastVersion;

  constructor(
    db: Db,
    private readonly notes: GroupNotes,
  ) {
    const { $client: client } = db;
    this.tallies = new EventTallies(db);
    this.groundings = new Groundings(db);
    this.insert = client.prepare(
      `INSERT INTO events (trigger_id, network_id, site_id, kind, ${NUMBER_COLUMNS}) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
    );
    this.update = client.prepare(`UPDATE events SET (${NUMBER_COLUMNS}) = (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?) WHERE trigger_id = ?`);
    this.keepVersion = client.prepare<[number, number]>(
      `INSERT INTO event_versions (trigger_id, ${NUMBER_COLUMNS}, ended_change) SELECT trigger_id, ${NUMBER_COLUMNS}, ? FROM events WHERE trigger_id = ?`,
    );
    this.remove = client.prepare<[number]>('DELETE FROM events WHERE trigger_id = ?');
    this.standing = client.prepare<[number], StandingRow>(
      'SELECT e.*, t.series, t.sequence FROM events AS e JOIN triggers AS t ON t.id = e.trigger_id WHERE e.trigger_id = ?',
    );
    this.lastVersion = client.prepare<[number], number | null>('SELECT max(version) FROM event_versions WHERE trigger_id = ?').pluck();
  }

  /** An event stands from now on: for the first time, or again. */
  put(network: NetworkInForce, trigger: StandingTrigger, made: MadeEvent, isNew: boolean): void {
    const version = isNew ? 1 : (this.lastVersion.get(trigger.triggerId) ?? 0) + 1;
    const event = storedEvent(trigger, made, version);
    this.insert.run(trigger.triggerId, network.id, trigger.siteId, event.kind, ...this.numbers(network, event, made));
    this.tallies.count(event, 1);
    this.notes.came(network.id, event);
  }

  /** An event stands no longer; what it was is kept. */
  withdraw(network: NetworkInForce, triggerId: number): void {
    const row = this.standing.get(triggerId);
    if (!row) throw new Error(`no event of trigger ${triggerId} stands`);
    this.keepVersion.run(this.notes.changeNumber(network.id), triggerId);
    this.remove.run(triggerId);
    this.tallies.count(countedOf(row), -1);
    const site = network.siteById.get(row.site_id)?.row ?? -1;
    this.notes.went(network.id, { triggerId, siteId: row.site_id, site, series: row.series, sequence: row.sequence });
  }

  /** An event that stands is computed anew; nothing changes where it rests on the same and comes to the same. Answers whether it changed. */
  recompute(network: NetworkInForce, trigger: StandingTrigger, made: MadeEvent): boolean {
    const row = this.standing.get(trigger.triggerId);
    if (!row) throw new Error(`no event of trigger ${trigger.triggerId} stands`);
    if (this.groundings.idOf(made, network.tables) === row.grounding_id && isSame(row, made)) return false;
    this.keepVersion.run(this.notes.changeNumber(network.id), trigger.triggerId);
    const event = storedEvent(trigger, made, row.version + 1);
    this.update.run(...this.numbers(network, event, made), trigger.triggerId);
    this.tallies.count(countedOf(row), -1);
    this.tallies.count(event, 1);
    this.notes.came(network.id, event);
    return true;
  }

  write(): void {
    this.tallies.write();
  }

  forget(): void {
    this.tallies.forget();
    this.groundings.forget();
  }

  private numbers(network: NetworkInForce, event: StoredEvent, made: MadeEvent): (number | string | Buffer | null)[] {
    const groundingId = this.groundings.idOf(made, network.tables);
    const changeNumber = this.notes.changeNumber(network.id);
    return [
      groundingId,
      event.taiS,
      event.ps,
      event.xM,
      event.yM,
      event.zM,
      event.readingSigmaNs,
      event.sigmaSource,
      event.sigmaNs,
      event.sinceEpochDays,
      Number.isNaN(event.amplitude) ? null : event.amplitude,
      event.eventVersion,
      changeNumber,
      eventRowHash(event, { networkId: network.id, groundingId, changeNumber }),
    ];
  }
}

/** Whether an event that stands has the numbers that were computed now; the rest of the double follows from them. */
const isSame = (row: StandingRow, made: MadeEvent): boolean =>
  row.tai_s === made.taiS &&
  row.ps === made.ps &&
  row.x_m === made.xM &&
  row.y_m === made.yM &&
  row.z_m === made.zM &&
  row.sigma_ns === made.sigmaNs &&
  row.reading_sigma_ns === made.readingSigmaNs &&
  row.since_epoch_days === made.sinceEpochDays;

function storedEvent({ triggerId, siteId }: StandingTrigger, made: MadeEvent, eventVersion: number): StoredEvent {
  return {
    triggerId,
    siteId,
    site: made.site,
    series: made.series,
    sequence: made.sequence,
    kind: KINDS[made.kind] ?? 'test',
    taiS: made.taiS,
    ps: made.ps,
    xM: made.xM,
    yM: made.yM,
    zM: made.zM,
    version: made.versionRow,
    readingSigmaNs: made.readingSigmaNs,
    sigmaSource: SIGMA_SOURCES[made.sigmaSource] ?? 'record',
    sigmaNs: made.sigmaNs,
    segment: made.segment,
    sinceEpochDays: made.sinceEpochDays,
    sinceEpochRestDays: made.sinceEpochRestDays,
    amplitude: made.amplitude,
    eventVersion,
  };
}
