import { type Instant } from '#shared/time/instant';
import { type Order } from '#shared/contract/list-query';
import { unusable } from '../api/refusal';
import { part, type Query } from './query';

/** The values of a row's sort columns, its id the last: what a list goes on behind. */
export type Position = readonly number[];

/** A position as clients hand it back: they need not know what it says. */
export const positionText = (sort: string, position: Position): string => Buffer.from([sort, ...position].join(' ')).toString('base64url');

/**
 * Reads a position.
 *
 * @param text as it was handed out
 * @param sort of the list that it must be one of
 * @param width how many values a position has there
 * @throws Refusal 400 for one of another list or sort, or that nobody handed out
 */
export function positionFrom(text: string, sort: string, width: number): Position {
  const [itsSort, ...words] = Buffer.from(text, 'base64url').toString('latin1').split(' ');
  const position = words.map((word) => (/^(?:-?Infinity|-?\d[\de.+-]{0,24})$/.test(word) ? Number(word) : NaN));
  if (itsSort !== sort || position.length !== width || position.some((value) => Number.isNaN(value)))
    throw unusable({ where: 'cursor', text: 'must be the "next" or "back" of a page of this list in this sort' });
  return position;
}

/** Behind a position in an order, such as `(tai_s, ps, trigger_id) > (?, ?, ?)`. */
export const behind = (columns: readonly string[], order: Order, position: Position): Query =>
  part(`(${columns.join(', ')}) ${order === 'up' ? '>' : '<'} (${position.map(() => '?').join(', ')})`, ...position);

/** `ORDER BY` columns, all in one direction. */
export const orderedBy = (columns: readonly string[], order: Order): string =>
  `ORDER BY ${columns.map((column) => (order === 'up' ? column : `${column} DESC`)).join(', ')}`;

/** What keeps a list in time order within a span and behind a position. */
export interface TimeBounds {
  readonly from?: Instant | undefined;
  readonly to?: Instant | undefined;
  readonly after?: Position | undefined;
}

/**
 * The bounds of a list that goes by time (seconds, picoseconds, id): at most one below and one above, since SQLite searches an index by one
 * of two bounds on the same side and passes over all rows up to the other.
 */
export function timeBounds(columns: readonly [string, string, string], order: Order, { from, to, after }: TimeBounds): Query[] {
  const [seconds, picoseconds] = columns;
  const [afterS = 0, afterPs = 0] = after ?? [];
  const isBefore = (instant: Instant): boolean => afterS < instant.taiS || (afterS === instant.taiS && afterPs < instant.ps);
  const counts = after !== undefined && (order === 'up' ? from === undefined || !isBefore(from) : to === undefined || isBefore(to));
  const bounds: Query[] = counts ? [behind(columns, order, after)] : [];
  if (from && !(counts && order === 'up')) bounds.push(part(`(${seconds}, ${picoseconds}) >= (?, ?)`, from.taiS, from.ps));
  if (to && !(counts && order === 'down')) bounds.push(part(`(${seconds}, ${picoseconds}) < (?, ?)`, to.taiS, to.ps));
  return bounds;
}

/**
 * A part of a list from rows that were asked for with one more than it holds.
 *
 * @param rows at most limit + 1
 * @param limit the most items of the part
 * @param positionOf where a row stands, as clients hand it back
 */
export function partFrom<Row>(
  rows: readonly Row[],
  limit: number,
  positionOf: (row: Row) => string,
): { items: Row[]; next: string | null; back: string | null } {
  const items = rows.slice(0, limit);
  const [first, last] = [items[0], items.at(-1)];
  return {
    items,
    next: last !== undefined && rows.length > limit ? positionOf(last) : null,
    back: first === undefined ? null : positionOf(first),
  };
}
