import { eq } from 'drizzle-orm';
import { type LeapSecondTable, parseLeapSeconds } from '#shared/time/leap-seconds';
import { shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { leapSecondTables } from '#schema/schema';
import { type Db } from '../db';

/** The leap-second list in force: the one that the database names, else the one that came with the program. */
export function leapSecondsInForce(db: Pick<Db, 'select'>): LeapSecondTable {
  const row = db.select({ body: leapSecondTables.body }).from(leapSecondTables).where(eq(leapSecondTables.isInForce, true)).get();
  return row ? parsedList(row.body) : shippedLeapSeconds();
}

/** Lists by their text: few, and asked for at every request that tells what holds at present. */
const parsed = new Map<string, LeapSecondTable>();

/** A list that was checked before it was kept; parsed once. */
export function parsedList(body: string): LeapSecondTable {
  const known = parsed.get(body);
  if (known) return known;
  const list = parseLeapSeconds(body);
  if (!list.ok) throw new Error(`a leap-second list that was kept cannot be read: ${list.problem.where} ${list.problem.text}`);
  parsed.set(body, list.value);
  return list.value;
}
