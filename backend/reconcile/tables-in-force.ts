import { constantOrientation } from '#shared/earth/earth-orientation';
import { readFinalsFile } from '#shared/earth/finals-file';
import { type OrientationTable } from '#shared/earth/orientation-table';
import { type EarthRotation, earthRotation } from '#shared/earth/rotation';
import { type Instant } from '#shared/time/instant';
import { type LeapSecondTable, taiMinusUtcAt, taiMinusUtcOnDay } from '#shared/time/leap-seconds';
import { SHIPPED_LEAP_SECONDS_LIST, shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { type Db } from '../db';
import { utcText } from '../ground';
import { parsedList } from '../tables/leap-seconds-in-force';

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

/**
 * A leap-second list of the database, parsed once.
 *
 * @param id of the table; 0 for the list that came with the program
 */
export function leapSecondsOf(db: Db, id: number): LeapSecondTable {
  if (id === 0) return shippedLeapSeconds();
  const body = db.$client.prepare<[number], string>('SELECT body FROM leap_second_tables WHERE id = ?').pluck().get(id);
  if (body === undefined) throw new Error(`there is no leap-second list ${id}`);
  return parsedList(body);
}

/** What was read last, by connection: rows of tables never change, so the same ids are the same tables. */
const lastRead = new WeakMap<Db, TablesInForce>();

/**
 * The tables of time and Earth that are in force: read again only where others are by now.
 *
 * @param db any connection
 * @returns the tables; where the database has no leap-second list, the one that came with the program
 */
export function tablesInForce(db: Db): TablesInForce {
  const idInForce = (table: 'leap_second_tables' | 'orientation_tables'): number | undefined =>
    db.$client.prepare<[], number>(`SELECT id FROM ${table} WHERE is_in_force = 1`).pluck().get();
  const leapSecondTableId = idInForce('leap_second_tables') ?? 0;
  const orientationTableId = idInForce('orientation_tables') ?? null;
  const last = lastRead.get(db);
  if (last?.leapSecondTableId === leapSecondTableId && last.orientationTableId === orientationTableId) return last;
  const tables = readTables(db, leapSecondTableId, orientationTableId);
  lastRead.set(db, tables);
  return tables;
}

function readTables(db: Db, leapSecondTableId: number, orientationTableId: number | null): TablesInForce {
  const leapSeconds = leapSecondsOf(db, leapSecondTableId);
  const orientation = orientationTableId === null ? undefined : orientationOf(db, orientationTableId, leapSeconds);
  const rotations = new Map<number, EarthRotation>();
  return {
    leapSecondTableId,
    leapSeconds,
    orientationTableId,
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

function orientationOf(db: Db, id: number, leapSeconds: LeapSecondTable): OrientationTable {
  const body = db.$client.prepare<[number], string>('SELECT body FROM orientation_tables WHERE id = ?').pluck().get(id) ?? '';
  const read = readFinalsFile(body, (day) => taiMinusUtcOnDay(leapSeconds, day) ?? 0);
  if (!read.ok) throw new Error(`Earth-orientation table ${id}: ${read.problem.where}: ${read.problem.text}`);
  return read.value;
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
