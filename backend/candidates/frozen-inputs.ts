import { type FrozenInputs } from '#shared/contract/certificate';
import { finalsExcerpt } from '#shared/earth/finals-excerpt';
import { readFinalsFile } from '#shared/earth/finals-file';
import { type Outcome, problemOf, valueOf } from '#shared/outcome';
import { type Instant } from '#shared/time/instant';
import { type LeapSecondTable, taiMinusUtcOnDay } from '#shared/time/leap-seconds';
import { SHIPPED_LEAP_SECONDS_LIST } from '#shared/time/shipped-leap-seconds';
import { activeRules } from '../coincidences/active-rule';
import { type Db } from '../db';
import { type FileFrame, statedFrames } from '../reconcile/frames-in-force';
import { leapSecondsOf } from '../reconcile/tables-in-force';
import { part, rowsOf } from '../search/query';
import { baselineSites, clocksOf, oneOf, referencesOf, runOf, sitesOf, timeText } from './frozen-network';
import { frozenRecord, groundedRecords } from './grounded-records';

/** Which events are frozen, and in which frames their order is stated. */
export interface ToFreeze {
  readonly networkId: number;
  /** Of events that stand. */
  readonly triggerIds: readonly number[];
  /** Codes; their parents come with them. */
  readonly frames: readonly string[];
  readonly sigmas: number;
  /** The rule by which the events were found; null for events that were taken by hand. */
  readonly ruleId: number | null;
}

interface NetworkRow {
  name: string;
  origin_tai_s: number;
  origin_ps: number;
}

type FileRule = NonNullable<FrozenInputs['network']['rule']>;

const originOf = (row: NetworkRow): Instant => ({ taiS: row.origin_tai_s, ps: row.origin_ps });

function ruleOf(db: Db, networkId: number, ruleId: number | null): FileRule | undefined {
  const rule = activeRules(db, networkId).find((one) => one.ruleId === ruleId)?.rule;
  if (!rule) return undefined;
  const { code, minimumFold, sigmas, window } = rule;
  return {
    code,
    minimum_fold: minimumFold,
    sigmas,
    window:
      window.kind === 'light-time'
        ? { kind: 'light-time', speed_c: window.speedC, margin_ns: window.marginNs }
        : { kind: 'fixed', width_ns: window.widthNs, frame: window.frame },
  };
}

/** The frames asked for with all that they hang on, in the network's order. */
function withParents(stated: readonly FileFrame[], codes: readonly string[]): readonly FileFrame[] {
  const wanted = new Set<string>();
  const want = (code: string): void => {
    const frame = stated.find((one) => one.code === code);
    if (!frame || wanted.has(code)) return;
    wanted.add(code);
    if (frame.parent !== undefined) want(frame.parent);
  };
  codes.forEach(want);
  return stated.filter(({ code }) => wanted.has(code));
}

function orientationText(db: Db, id: number | null, leapSeconds: LeapSecondTable, instants: readonly Instant[]): Outcome<string | null> {
  if (id === null) return valueOf(null);
  const [row] = rowsOf<{ body: string }>(db, part('SELECT body FROM orientation_tables WHERE id = ?', id));
  const table = readFinalsFile(row?.body ?? '', (day) => taiMinusUtcOnDay(leapSeconds, day) ?? 0);
  return table.ok ? valueOf(finalsExcerpt(row?.body ?? '', table.value, instants)) : table;
}

function listText(db: Db, id: number): string {
  const [row] = rowsOf<{ body: string }>(db, part('SELECT body FROM leap_second_tables WHERE id = ?', id));
  return row?.body ?? SHIPPED_LEAP_SECONDS_LIST;
}

/**
 * Reads from the database all that the numbers of some events' pairs rest on.
 *
 * @param db any connection
 * @returns inputs from which `recomputed` makes the numbers again; a problem where an event does not stand, or the events rest on two versions of
 *   what a network has once, since they are being computed anew
 */
export function frozenInputs(db: Db, { networkId, triggerIds, frames: codes, sigmas, ruleId }: ToFreeze): Outcome<FrozenInputs> {
  const rows = groundedRecords(db, networkId, triggerIds);
  const [first, last] = [rows[0], rows.at(-1)];
  const [network] = rowsOf<NetworkRow>(db, part('SELECT name, origin_tai_s, origin_ps FROM networks WHERE id = ?', networkId));
  if (!first || !last || !network || rows.length < triggerIds.length)
    return problemOf('events-gone', 'events', `${triggerIds.length - rows.length} of ${triggerIds.length} do not stand any more`);
  const listId = oneOf(
    rows.map((row) => row.leapSecondTableId),
    'leap-second list',
  );
  if (!listId.ok) return listId;
  const orientationId = oneOf(
    rows.map((row) => row.orientationTableId),
    'Earth-orientation table',
  );
  if (!orientationId.ok) return orientationId;
  const references = referencesOf(rows);
  if (!references.ok) return references;
  const rule = ruleOf(db, networkId, ruleId);
  const ofWindow = rule?.window.kind === 'fixed' && rule.window.frame !== undefined ? [rule.window.frame] : [];
  const frames = withParents(statedFrames(db, networkId), [...codes, ...ofWindow]);
  const { sites, codeOf } = sitesOf(db, rows);
  const isFromOrigin = frames.some(({ at, velocity }) => at === 'origin' && velocity?.toward?.baseline !== undefined);
  const instants = [first, last, ...(isFromOrigin ? [originOf(network)] : [])];
  const orientation = orientationText(db, orientationId.value, leapSecondsOf(db, listId.value), instants);
  if (!orientation.ok) return orientation;
  return valueOf({
    network: {
      network: network.name,
      run: runOf(db, [...new Set(rows.map(({ runId }) => runId))]),
      origin: { time: timeText(originOf(network)) },
      references: references.value,
      clocks: clocksOf(db, rows),
      sites: [...sites, ...baselineSites(db, networkId, frames, sites, first)],
      frames: [...frames],
      ...(rule && { rule }),
    },
    records: rows.map((row) => frozenRecord(row, codeOf.get(row.siteVersionId) ?? row.site)),
    leapSeconds: listText(db, listId.value),
    orientation: orientation.value,
    sigmas,
  });
}
