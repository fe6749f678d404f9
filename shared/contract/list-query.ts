import * as z from 'zod';
import { type Instant } from '../time/instant';
import { oneOf } from './leaves';
import { MOST_ITEMS, pageQuery } from './page';

/** The longest span that a list can be asked for: whoever wants more goes on from page to page without one. */
export const MOST_SPAN_S = 400 * 86_400;

/** Most ids in one query. */
export const MOST_IDS = 64;

/** Upwards: the least, earliest, oldest first. */
export const ORDERS = ['up', 'down'] as const;
export type Order = (typeof ORDERS)[number];

const INSTANT_RIGHT = 'whole seconds of TAI since 1970-01-01T00:00:00 TAI, and where there are any, a comma and whole picoseconds';
const POSITION_RIGHT = 'the "next" or "back" of a page of this list in this sort';

/** An instant as it stands in an address, such as `1772323237,500000000000`. */
export const instantText = z
  .string({ error: INSTANT_RIGHT })
  .regex(/^-?\d{1,11}(?:,\d{1,12})?$/, INSTANT_RIGHT)
  .transform((text): Instant => {
    const [taiS = '0', ps = '0'] = text.split(',');
    return { taiS: Number(taiS), ps: Number(ps) };
  });

/** A whole number, 0 or more, as it stands in an address. */
export const countText = z
  .string({ error: 'a whole number, 0 or more' })
  .regex(/^\d{1,15}$/, 'a whole number, 0 or more')
  .transform(Number);

/** Ids as they stand in an address, with commas between them; each once. */
export const idsText = (most: number) => {
  const right = `1 to ${most} different ids with commas between them`;
  return z
    .string({ error: right })
    .regex(/^[1-9]\d{0,14}(?:,[1-9]\d{0,14})*$/, right)
    .transform((text) => text.split(',').map(Number))
    .refine((ids) => ids.length <= most && new Set(ids).size === ids.length, right);
};

/** One of the words of a list, as it stands in an address. */
export const wordText = <const T extends string>(...words: readonly T[]) => oneOf(...words).optional();

/**
 * The fields of a query that asks for a part of a list: `cursor` is where it goes on, behind that item in the order that is asked for, so
 * that one position serves both ways; absent for the beginning.
 */
export const partQuery = {
  cursor: z
    .string({ error: POSITION_RIGHT })
    .regex(/^[A-Za-z0-9_-]{1,200}$/, POSITION_RIGHT)
    .optional(),
  order: wordText(...ORDERS),
  limit: pageQuery.limit,
};

/** The fields of a query that keeps a list to a span: `from` belongs to it, `to` does not. */
export const spanQuery = { from: instantText.optional(), to: instantText.optional() };

/** Whether a span that was asked for has a length, and one that is allowed. */
export const isUsableSpan = ({ from, to }: { readonly from?: Instant | undefined; readonly to?: Instant | undefined }): boolean => {
  if (from === undefined || to === undefined) return true;
  const lengthS = to.taiS - from.taiS + (to.ps - from.ps) / 1e12;
  return lengthS > 0 && lengthS <= MOST_SPAN_S;
};

export const SPAN_FAULT = { path: ['to'], error: `an instant behind "from", at most ${MOST_SPAN_S / 86_400} days behind it` };

/**
 * A part of a list. `next` goes on behind its last item, null at the end. `back` is the place of its first item: with the other `order` what
 * lies before it, and at a live edge what came since; null when there is no item.
 */
export const partOf = <Item extends z.ZodType>(item: Item) =>
  z.strictObject({ items: z.array(item).max(MOST_ITEMS), next: z.string().nullable(), back: z.string().nullable() });

/**
 * A part of a list that the live socket goes on from: `change` is the number of the network's last change when it was read. The changes
 * behind it are what is not in it yet (live-socket.ts); a search may hold some of them already, which doubles nothing.
 */
export const partAt = <Item extends z.ZodType>(item: Item) => partOf(item).extend({ change: z.int() });
