import { constantOrientation } from '#shared/earth/earth-orientation';
import { readFinalsFile } from '#shared/earth/finals-file';
import { type OrientationTable } from '#shared/earth/orientation-table';
import { type EarthRotation, earthRotation } from '#shared/earth/rotation';
import { type Outcome } from '#shared/outcome';
import { type Instant } from '#shared/time/instant';
import { type LeapSecondTable, parseLeapSeconds, taiMinusUtcOnDay } from '#shared/time/leap-seconds';
import { SHIPPED_LEAP_SECONDS_LIST, shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { taiMinusUtcAt } from '../command/ground-tables';
import { type Db } from '../db';
import { utcText } from '../ground';

/** The tables of time and Earth that events rest on. */
export interface TablesInForce {
  /** 0 where the database has no list yet and the shipped one serves. */
  readonly leapSecondTableId: number;
  readonly leapSeconds: LeapSecondTable;
  /** null where no table of the Earth's orientation is loaded. */
  readonly orientationTableId: number | null;
  readonly orientation: OrientationTable | undefined;
  /** The Earth's rotation for a run that begins at an instant: one and the same object for the same value of UT1 - TAI. */
  readonly rotationFor: (runFrom: Instant) => EarthRotation;
}

function good<T>(outcome: Outcome<T>, what: string): T {
  if (!outcome.ok) throw new Error(`${what}: ${outcome.problem.where}: ${outcome.problem.text}`);
  return outcome.value;
}

const parsedLists = new Map<string, LeapSecondTable>();

/**
 * A leap-second list of the database, parsed once.
 *
 * @param id of the table; 0 for the list that came with the program
 */
export function leapSecondsOf(db: Db, id: number): LeapSecondTable {
  if (id === 0) return shippedLeapSeconds();
  const row = db.$client
    .prepare<[number], { sha1: string; body: string }>('SELECT sha1, body FROM leap_second_tables WHERE id = ?')
    .get(id);
  if (!row) throw new Error(`there is no leap-second list ${id}`);
  const known = parsedLists.get(row.sha1);
  if (known) return known;
  const table = good(parseLeapSeconds(row.body), `leap-second list ${id}`);
  parsedLists.set(row.sha1, table);
  return table;
}

/**
 * Reads the tables of time and Earth that are in force.
 *
 * @param db any connection
 * @returns the tables; where the database has no leap-second list, the one that came with the program
 */
export function tablesInForce(db: Db): TablesInForce {
  const list = db.$client.prepare<[], number>('SELECT id FROM leap_second_tables WHERE is_in_force = 1').pluck().get();
  const leapSecondTableId = list ?? 0;
  const leapSeconds = leapSecondsOf(db, leapSecondTableId);
  const finals = db.$client
    .prepare<[], { id: number; body: string }>('SELECT id, body FROM orientation_tables WHERE is_in_force = 1')
    .get();
  const orientation =
    finals &&
    good(
      readFinalsFile(finals.body, (day) => taiMinusUtcOnDay(leapSeconds, day) ?? 0),
      `Earth-orientation table ${finals.id}`,
    );
  const rotations = new Map<number, EarthRotation>();
  return {
    leapSecondTableId,
    leapSeconds,
    orientationTableId: finals?.id ?? null,
    orientation,
    rotationFor: (runFrom) => {
      const taiMinusUtcS = orientation ? 0 : taiMinusUtcAt(leapSeconds, runFrom);
      const known = rotations.get(taiMinusUtcS);
      if (known) return known;
      const made = earthRotation(orientation ?? constantOrientation(-taiMinusUtcS));
      rotations.set(taiMinusUtcS, made);
      return made;
    },
  };
}

/**
 * Puts the leap-second list that came with the program in force where the database has none: events must name the list that they rest on.
 *
 * @param db the writing connection
 * @param nowMs the server's clock
 */
export function keepShippedLeapSeconds(db: Db, nowMs: number): void {
  const isInForce = db.$client.prepare('SELECT 1 FROM leap_second_tables WHERE is_in_force = 1').get() !== undefined;
  if (isInForce) return;
  const table = shippedLeapSeconds();
  db.$client
    .prepare(
      `INSERT INTO leap_second_tables (body, sha1, updated_tai_s, expires_tai_s, is_in_force, created_at) VALUES (?, ?, ?, ?, 1, ?)
       ON CONFLICT (sha1) DO UPDATE SET is_in_force = 1`,
    )
    .run(SHIPPED_LEAP_SECONDS_LIST, table.sha1, table.updated.taiS, table.expires.taiS, utcText(nowMs));
}
