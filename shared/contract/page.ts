import * as z from 'zod';

/** The most items of a page, and how many come when none is asked for. */
export const MOST_ITEMS = 200;
export const USUAL_ITEMS = 50;

/** A positive whole number as it stands in an address. */
export const idText = z
  .string({ error: 'a whole number, at least 1' })
  .regex(/^[1-9]\d{0,14}$/, 'a whole number, at least 1')
  .transform(Number);

const CURSOR_RIGHT = 'the "next" of the page before';
const LIMIT_RIGHT = `a whole number from 1 to ${MOST_ITEMS}`;

/** The fields of a query that asks for a page: `cursor` is the `next` of the page before, absent for the first. */
export const pageQuery = {
  cursor: z
    .string({ error: CURSOR_RIGHT })
    .regex(/^[1-9]\d{0,14}$/, CURSOR_RIGHT)
    .transform(Number)
    .optional(),
  limit: z
    .string({ error: LIMIT_RIGHT })
    .refine((text) => /^[1-9]\d{0,2}$/.test(text) && Number(text) <= MOST_ITEMS, LIMIT_RIGHT)
    .transform(Number)
    .optional(),
};

/** A page of items; `next` asks for the one after, null at the end. */
export const pageOf = <Item extends z.ZodType>(item: Item) =>
  z.strictObject({ items: z.array(item).max(MOST_ITEMS), next: z.string().nullable() });
