import { compareInstants, type Instant } from '#shared/time/instant';
import { type Db } from '../db';
import { type SetNumbers } from './set-numbers';
import { type FoundCrowd, type Stretch } from './stretch-search';

/** A coincidence in force, as far as finding what changed needs it. */
export interface CurrentRow {
  readonly id: number;
  readonly setHash: string;
  readonly rowHash: Buffer;
}

/** What a new row needs besides its numbers. */
export interface NewRow {
  readonly networkId: number;
  readonly versionId: number;
  readonly isFinal: boolean;
  readonly touchesGap: boolean;
  readonly change: number;
}

const COINCIDENCE = `INSERT INTO coincidences (network_id, rule_version_id, set_hash, state, is_current, fold, first_tai_s, first_ps, span_ns, class,
  timelike_pairs, spacelike_pairs, undecided_pairs, nearest_margin_sigma, least_turning_speed_c, amplitude, touches_gap, since_change, row_hash)
  VALUES (?, ?, ?, ?, 1, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`;

const PAIR = `INSERT INTO pairs (coincidence_id, a, b, class, dt_ns, distance_m, sigma_dt_ns, sigma_gap_ns, margin_sigma, reverse_margin_sigma, interval_m2,
  proper_time_s, proper_distance_m, turning_speed_c, turning_sigma_c, toward_x, toward_y, toward_z)
  VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`;

const MEMBER = `INSERT INTO members (coincidence_id, place, trigger_id, site_id, event_version, is_current, first_tai_s, first_ps)
  VALUES (?, ?, ?, ?, ?, 1, ?, ?)`;

const CROWD = `INSERT INTO crowded_events (rule_version_id, trigger_id, sites, events, sets_at_least, since_change) VALUES (?, ?, ?, ?, ?, ?)
  ON CONFLICT DO UPDATE SET sites = excluded.sites, events = excluded.events, sets_at_least = excluded.sets_at_least, since_change = excluded.since_change
  WHERE (sites, events, sets_at_least) IS NOT (excluded.sites, excluded.events, excluded.sets_at_least)`;

const IN_STRETCH = 'rule_version_id = ? AND is_current = 1 AND (first_tai_s, first_ps) >= (?, ?) AND (first_tai_s, first_ps) <= (?, ?)';

/** Reads and writes the rows of coincidences, all within the transaction of whoever calls. */
export class CoincidenceRows {
  private readonly insertCoincidence;
  private readonly insertMember;
  private readonly insertPair;
  private readonly endRow;
  private readonly selectMembers;
  private readonly insertGrowth;
  private readonly selectByName;
  private readonly selectIn;
  private readonly selectLatest;
  private readonly finish;
  private readonly putCrowd;
  private readonly deleteCrowd;
  private readonly deleteCrowds;
  private readonly deleteGone;
  private readonly selectOthers;
  private readonly selectVersions;

  constructor(db: Db) {
    const { $client: client } = db;
    this.insertCoincidence = client.prepare(COINCIDENCE);
    this.insertMember = client.prepare(MEMBER);
    this.insertPair = client.prepare(PAIR);
    this.endRow = client.prepare("UPDATE coincidences SET state = 'former', is_current = 0, ended_change = ? WHERE id = ?");
    this.selectMembers = client.prepare<[number], number>('SELECT trigger_id FROM members WHERE coincidence_id = ? ORDER BY place').pluck();
    this.insertGrowth = client.prepare('INSERT INTO growths (coincidence_id, grew_from_id) VALUES (?, ?)');
    this.selectByName = client.prepare<[number, string, number], CurrentRow>(
      `SELECT id, set_hash AS setHash, row_hash AS rowHash FROM coincidences
       WHERE network_id = ? AND set_hash = ? AND rule_version_id = ? AND is_current = 1`,
    );
    this.selectIn = client.prepare<[number, number, number, number, number], CurrentRow>(
      `SELECT id, set_hash AS setHash, row_hash AS rowHash FROM coincidences WHERE ${IN_STRETCH}`,
    );
    this.selectLatest = client
      .prepare<[number, number], number>(
        `SELECT id FROM coincidences WHERE rule_version_id = ? AND is_current = 1 ORDER BY first_tai_s DESC, first_ps DESC, id DESC LIMIT ?`,
      )
      .pluck();
    this.finish = client
      .prepare<[number, number, number, number, number], number>(
        `UPDATE coincidences SET state = 'final' WHERE id IN (SELECT id FROM coincidences WHERE network_id = ? AND state = 'open'
         AND (first_tai_s, first_ps) <= (?, ?) AND rule_version_id = ? ORDER BY first_tai_s, first_ps LIMIT ?) RETURNING id`,
      )
      .pluck();
    this.putCrowd = client.prepare(CROWD);
    this.deleteCrowd = client.prepare('DELETE FROM crowded_events WHERE rule_version_id = ? AND trigger_id = ?');
    this.deleteCrowds = client.prepare('DELETE FROM crowded_events WHERE rule_version_id = ?');
    this.deleteGone = client.prepare(
      'DELETE FROM crowded_events WHERE rule_version_id = ? AND NOT EXISTS (SELECT 1 FROM events e WHERE e.trigger_id = crowded_events.trigger_id)',
    );
    this.selectOthers = client
      .prepare<[number, number], number>('SELECT id FROM rule_versions WHERE rule_id = ? AND id <> ? ORDER BY id')
      .pluck();
    this.selectVersions = client
      .prepare<[number], number>('SELECT v.id FROM rules r JOIN rule_versions v ON v.rule_id = r.id WHERE r.network_id = ? ORDER BY v.id')
      .pluck();
  }

  /** The other versions of a rule. */
  otherVersions(ruleId: number, versionId: number): readonly number[] {
    return this.selectOthers.all(ruleId, versionId);
  }

  /** All versions of all rules of a network. */
  versionsOf(networkId: number): readonly number[] {
    return this.selectVersions.all(networkId);
  }

  /** The set of a name in force. */
  byName(networkId: number, setHash: string, versionId: number): CurrentRow | undefined {
    return this.selectByName.get(networkId, setHash, versionId);
  }

  /** The sets of a rule's version in force that begin in a stretch. */
  within(versionId: number, { from, to }: Stretch): readonly CurrentRow[] {
    return compareInstants(from, to) > 0 ? [] : this.selectIn.all(versionId, from.taiS, from.ps, to.taiS, to.ps);
  }

  /** Those that begin last. */
  latest(versionId: number, most: number): readonly number[] {
    return this.selectLatest.all(versionId, most);
  }

  /** Puts a set in force. */
  insert(set: SetNumbers, { networkId, versionId, isFinal, touchesGap, change }: NewRow): number {
    const { timelike, spacelike, undecided } = set.counts;
    const { taiS, ps } = set.first;
    const { lastInsertRowid } = this.insertCoincidence.run(
      ...[networkId, versionId, set.setHash, isFinal ? 'final' : 'open', set.events.length, taiS, ps, set.spanNs, set.class],
      ...[timelike, spacelike, undecided, set.nearestMarginSigma, set.leastTurningSpeedC, set.amplitude, touchesGap ? 1 : 0, change],
      set.rowHash,
    );
    const id = Number(lastInsertRowid);
    set.events.forEach((event, at) => this.insertMember.run(id, at + 1, event.triggerId, event.siteId, event.eventVersion, taiS, ps));
    for (const pair of set.pairs) {
      const [x = null, y = null, z = null] = pair.toward ?? [];
      this.insertPair.run(
        ...[id, pair.a, pair.b, pair.class, pair.dtNs, pair.distanceM, pair.sigmaDtNs, pair.sigmaGapNs, pair.marginSigma],
        ...[pair.reverseMarginSigma, pair.intervalM2, pair.properTimeS, pair.properDistanceM, pair.turningSpeedC, pair.turningSigmaC],
        ...[x, y, z],
      );
    }
    return id;
  }

  /** A set is no longer in force. */
  end(id: number, change: number): void {
    this.endRow.run(change, id);
  }

  /** The triggers of a set, in their order. */
  triggersOf(id: number): readonly number[] {
    return this.selectMembers.all(id);
  }

  grew(id: number, fromId: number): void {
    this.insertGrowth.run(id, fromId);
  }

  /** Makes open sets final that begin up to an instant, the earliest first; answers their ids. */
  finishTo(networkId: number, versionId: number, to: Instant, most: number): readonly number[] {
    return this.finish.all(networkId, to.taiS, to.ps, versionId, most);
  }

  /** Says of a trigger that it is crowded, or not; answers whether that is news. */
  setCrowd(versionId: number, triggerId: number, crowd: FoundCrowd | undefined, change: number): boolean {
    const { changes } = crowd
      ? this.putCrowd.run(versionId, triggerId, crowd.sites, crowd.events, crowd.setsAtLeast, change)
      : this.deleteCrowd.run(versionId, triggerId);
    return changes > 0;
  }

  /** Takes away the crowded events that no longer stand; answers how many. */
  clearGoneCrowds(versionId: number): number {
    return this.deleteGone.run(versionId).changes;
  }

  /** Takes away all crowded events of a rule's version. */
  clearCrowds(versionId: number): void {
    this.deleteCrowds.run(versionId);
  }
}
