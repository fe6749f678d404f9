import * as z from 'zod';
import { instant, record } from './leaves';
import { idText, pageOf, pageQuery } from './page';
import { utc } from './people';
import { route } from './routes';
import { warning } from './setup-leaves';

/** A published leap-second list has 5 kB; finals2000A.all has 3.7 MB. */
const MOST_LIST_CHARACTERS = 500_000;
const MOST_FINALS_CHARACTERS = 8_000_000;
const MOST_LIST_BODY_BYTES = 1_000_000; // line ends are two bytes in JSON
const MOST_FINALS_BODY_BYTES = 9_000_000;

const tableParams = z.strictObject({ tableId: idText });

const fileText = (most: number, what: string) =>
  z.custom<string>((value) => typeof value === 'string' && value !== '' && value.length <= most, {
    error: `the whole text of ${what}, at most ${most} characters`,
  });

/** A leap-second list; whether it has expired, or soon will, stands in its warnings. */
export const leapSecondTable = z.strictObject({
  id: z.int(),
  sha1: z.string(),
  updated: instant(),
  /** From here on nobody has said yet whether there is another leap second. */
  expires: instant(),
  steps: z.int(),
  /** TAI - UTC after its last step. */
  taiMinusUtcS: z.int(),
  isInForce: z.boolean(),
  createdAt: utc(),
  /** Null for the list that came with the program. */
  createdBy: z.int().nullable(),
  warnings: z.array(warning),
});

/** An Earth-orientation table, by its days (Modified Julian Date, 0 h UTC). */
export const orientationTable = z.strictObject({
  id: z.int(),
  sha256: z.string(),
  firstMjd: z.int(),
  lastMjd: z.int(),
  /** The first day that is a prediction; null where all are measured. */
  predictedFromMjd: z.int().nullable(),
  isInForce: z.boolean(),
  createdAt: utc(),
  createdBy: z.int().nullable(),
  warnings: z.array(warning),
});

/** What is in force of time and Earth, and what is doubtful about it now: for every screen. */
export const tablesInForceShown = z.strictObject({
  /** Null in a new deployment, where the list that came with the program serves. */
  leapSeconds: leapSecondTable.nullable(),
  orientation: orientationTable.nullable(),
  warnings: z.array(warning),
});

/**
 * Tables are the whole deployment's. An upload is checked and kept, and does not change anything until it is put in force. Latest first; the
 * one table has its text.
 */
export const TABLE_ROUTES = {
  readTablesInForce: route('GET', '/tables-in-force', { policy: 'time-tables:read', answer: tablesInForceShown }),

  listLeapSecondTables: route('GET', '/leap-second-tables', {
    policy: 'time-tables:read',
    query: record(pageQuery),
    answer: pageOf(leapSecondTable),
  }),
  readLeapSecondTable: route('GET', '/leap-second-tables/:tableId', {
    policy: 'time-tables:read',
    params: tableParams,
    answer: leapSecondTable.extend({ text: z.string() }),
  }),
  /** `text`: a file in the form of the IERS's leap-seconds.list, whose own hash must be right. */
  uploadLeapSecondTable: route('POST', '/leap-second-tables', {
    policy: 'leap-second-table:upload',
    body: record({ text: fileText(MOST_LIST_CHARACTERS, 'a leap-seconds.list') }),
    answer: leapSecondTable,
    makes: true,
    mostBodyBytes: MOST_LIST_BODY_BYTES,
  }),
  putLeapSecondTableInForce: route('POST', '/leap-second-tables/:tableId/put-in-force', {
    policy: 'leap-second-table:put-in-force',
    params: tableParams,
    answer: leapSecondTable,
  }),

  listOrientationTables: route('GET', '/orientation-tables', {
    policy: 'time-tables:read',
    query: record(pageQuery),
    answer: pageOf(orientationTable),
  }),
  readOrientationTable: route('GET', '/orientation-tables/:tableId', {
    policy: 'time-tables:read',
    params: tableParams,
    answer: orientationTable.extend({ text: z.string() }),
  }),
  /** `text`: a file in the form of the IERS's finals2000A. */
  uploadOrientationTable: route('POST', '/orientation-tables', {
    policy: 'orientation-table:upload',
    body: record({ text: fileText(MOST_FINALS_CHARACTERS, 'an IERS finals2000A file') }),
    answer: orientationTable,
    makes: true,
    mostBodyBytes: MOST_FINALS_BODY_BYTES,
  }),
  putOrientationTableInForce: route('POST', '/orientation-tables/:tableId/put-in-force', {
    policy: 'orientation-table:put-in-force',
    params: tableParams,
    answer: orientationTable,
  }),
};

export type LeapSecondTableShown = z.infer<typeof leapSecondTable>;
export type OrientationTableShown = z.infer<typeof orientationTable>;
