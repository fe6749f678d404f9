import { sql, type SQL } from 'drizzle-orm';
import { type AnySQLiteColumn, check, type CheckBuilder } from 'drizzle-orm/sqlite-core';

/**
 * The forms that columns are held to, as conditions of a CHECK. A column that may be NULL passes as NULL: SQLite lets a CHECK pass that
 * comes out as neither true nor false. Lengths are compared with `octet_length` where text is ASCII, since `length` and GLOB end at a NUL.
 */

const SAFE_INTEGER = sql.raw(String(Number.MAX_SAFE_INTEGER));
const LARGEST = sql.raw('1.7976931348623157e308');
const UTC_GLOB = '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z';

/** Stands for 'from ever on' where an instant begins a validity: before any reading. */
export const EVER_TAI_S = Number.MIN_SAFE_INTEGER;

/** Named CHECKs of a table: `TABLE_NAME` for each condition. */
export const checks = (table: string, conditions: Readonly<Record<string, SQL>>): CheckBuilder[] =>
  Object.entries(conditions).map(([name, condition]) => check(`${table}_${name}`, condition));

/** 1 to 24 letters, digits, `_` or `-`. */
export const isCode = (c: AnySQLiteColumn): SQL =>
  sql`octet_length(${c}) BETWEEN 1 AND 24 AND octet_length(${c}) = length(${c}) AND ${c} NOT GLOB '*[^A-Za-z0-9_-]*'`;

/** A code, or empty. */
export const isCodeOrEmpty = (c: AnySQLiteColumn): SQL => sql`${c} = '' OR (${isCode(c)})`;

/** A whole number of any size as digits without leading zeros. */
export const isWholeNumber = (c: AnySQLiteColumn): SQL =>
  sql`octet_length(${c}) BETWEEN 1 AND 4096 AND octet_length(${c}) = length(${c}) AND ${c} NOT GLOB '*[^0-9]*' AND (${c} = '0' OR ${c} NOT GLOB '0*')`;

const isHex = (c: AnySQLiteColumn, digits: number): SQL =>
  sql`octet_length(${c}) = ${sql.raw(String(digits))} AND length(${c}) = ${sql.raw(String(digits))} AND ${c} NOT GLOB '*[^0-9a-f]*'`;

/** A SHA-256 as 64 lower-case hex digits. */
export const isSha256 = (c: AnySQLiteColumn): SQL => isHex(c, 64);

/** A SHA-1 as 40 lower-case hex digits. */
export const isSha1 = (c: AnySQLiteColumn): SQL => isHex(c, 40);

/** A SHA-256 as 32 bytes: half the room, in tables of millions of rows. */
export const isHashBytes = (c: AnySQLiteColumn): SQL => sql`octet_length(${c}) = 32`;

/** An instant of the server's own clock: UTC, ISO 8601 with milliseconds. */
export const isUtc = (c: AnySQLiteColumn): SQL => sql`octet_length(${c}) = 24 AND ${c} GLOB '${sql.raw(UTC_GLOB)}'`;

/** An instant of the server's own clock as whole milliseconds since 1970-01-01T00:00:00Z, in tables of millions of rows. */
export const isUnixMs = (c: AnySQLiteColumn): SQL => sql`${c} BETWEEN 0 AND 253402300799999`;

/** Whole TAI seconds and picoseconds within the second; both or neither. */
export const isInstant = (taiS: AnySQLiteColumn, ps: AnySQLiteColumn): SQL =>
  sql`(${taiS} IS NULL) = (${ps} IS NULL) AND ${taiS} BETWEEN -${SAFE_INTEGER} AND ${SAFE_INTEGER} AND ${ps} BETWEEN 0 AND 999999999999`;

/** The first instant is not after the second; passes where the second is NULL (no end). */
export const isSpan = (fromTaiS: AnySQLiteColumn, fromPs: AnySQLiteColumn, toTaiS: AnySQLiteColumn, toPs: AnySQLiteColumn): SQL =>
  sql`(${fromTaiS}, ${fromPs}) <= (${toTaiS}, ${toPs})`;

/** A number that is neither infinite nor NaN (which SQLite stores as NULL). */
export const isFinite = (c: AnySQLiteColumn): SQL => sql`${c} BETWEEN -${LARGEST} AND ${LARGEST}`;

/** A standard error, a duration, a length: 0 or more and finite. */
export const isNotNegative = (c: AnySQLiteColumn): SQL => sql`${c} BETWEEN 0 AND ${LARGEST}`;

/** A whole number, at least `least`, exact as a number of JavaScript. */
export const isCount = (c: AnySQLiteColumn, least = 0): SQL => sql`${c} BETWEEN ${sql.raw(String(least))} AND ${SAFE_INTEGER}`;

/** Text of a bounded number of bytes. */
export const isText = (c: AnySQLiteColumn, most: number, least = 1): SQL =>
  sql`octet_length(${c}) BETWEEN ${sql.raw(String(least))} AND ${sql.raw(String(most))}`;

/** JSON of a bounded number of bytes. */
export const isJson = (c: AnySQLiteColumn, most: number): SQL => sql`json_valid(${c}) AND octet_length(${c}) <= ${sql.raw(String(most))}`;

/** One of a list of words. */
export const isOneOf = (c: AnySQLiteColumn, words: readonly string[]): SQL =>
  sql`${c} IN (${sql.raw(words.map((word) => `'${word}'`).join(', '))})`;

/** 0 or 1. */
export const isFlag = (c: AnySQLiteColumn): SQL => sql`${c} IN (0, 1)`;

/** Both NULL or both given. */
export const areTogether = (a: AnySQLiteColumn, b: AnySQLiteColumn): SQL => sql`(${a} IS NULL) = (${b} IS NULL)`;

/** The sum of the first is the sum of the others. */
export const isSumOf = (total: AnySQLiteColumn, ...parts: AnySQLiteColumn[]): SQL => sql`${total} = ${sql.join(parts, sql` + `)}`;
