import { existsSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import * as z from 'zod';
import { HISTORY_S } from '../scenario';
import { SLICE_S } from '../stream/plan';

const OWNER_ONLY_FILE = 0o600;
const LONGEST_PAUSE_S = 1_200; // what a site makes good after a pause; beyond it was off, and its numbering begins anew
const SENT_AGAIN_S = 120; // longer than any link is down or any record late, so that what was on its way at the end is sent once more

const sessionSchema = z.strictObject({
  /** The series of all records. */
  series: z.string(),
  /** From where on the records are numbered. */
  firstSlice: z.int(),
  /** Until when it streamed: TAI seconds. */
  lastTaiS: z.int(),
});

/** A time without longer pauses in which the demo streams, with one numbering. */
export type Session = z.infer<typeof sessionSchema>;

/** How a stream goes on. */
export interface Resumed {
  readonly session: Session;
  /** The first slice to send. */
  readonly fromSlice: number;
  /** A session that ended before, whose sites were live until then; absent for none. */
  readonly former?: Session;
}

/**
 * How the stream goes on at its start.
 *
 * @param known the last session; undefined for none
 * @param firstTaiS the first second of the demo's stream
 * @param nowTaiS the present
 * @returns the same session after a short pause, which is made good; else a new one, with the minutes before the present
 */
export function resume(known: Session | undefined, firstTaiS: number, nowTaiS: number): Resumed {
  const sliceAt = (taiS: number): number => Math.max(0, Math.floor((taiS - firstTaiS) / SLICE_S));
  if (known && nowTaiS - known.lastTaiS <= LONGEST_PAUSE_S)
    return { session: known, fromSlice: Math.max(known.firstSlice, sliceAt(known.lastTaiS - SENT_AGAIN_S)) };
  const firstSlice = sliceAt(nowTaiS - HISTORY_S);
  const isFirst = !known && nowTaiS - firstTaiS <= LONGEST_PAUSE_S;
  const session = isFirst ? { series: '', firstSlice: 0, lastTaiS: nowTaiS } : { series: `s${firstSlice}`, firstSlice, lastTaiS: nowTaiS };
  return { session, fromSlice: session.firstSlice, ...(known && { former: known }) };
}

const fileIn = (dataDir: string): string => join(dataDir, 'demo-feed.json');

/** The session that a data folder tells of; undefined for none, or one that cannot be read. */
export function readSession(dataDir: string): Session | undefined {
  if (!existsSync(fileIn(dataDir))) return undefined;
  try {
    return sessionSchema.safeParse(JSON.parse(readFileSync(fileIn(dataDir), 'utf8'))).data;
  } catch {
    return undefined;
  }
}

/** Keeps the session, whole or not at all. */
export function keepSession(dataDir: string, session: Session): void {
  writeFileSync(`${fileIn(dataDir)}.new`, `${JSON.stringify(session)}\n`, { mode: OWNER_ONLY_FILE });
  renameSync(`${fileIn(dataDir)}.new`, fileIn(dataDir));
}
