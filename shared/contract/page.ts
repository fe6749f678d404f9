import * as z from 'zod';

/** The most items of a page, and how many come when none is asked for. */
export const MOST_ITEMS = 200;
export const USUAL_ITEMS = 50;

/** A positive whole number as it stands in an address. */
export const idText = z
  .string({ error: 'a whole number, at least 1' })
  .regex(/^[1-9]\d{0,14}$/, 'a whole number, at least 1')
  .transform(Number);

/** The fields of a query that asks for a page: `cursor` is the `next` of the page before, absent for the first. */
export const pageQuery = {
  cursor: z
    .string()
    .regex(/^[1-9]\d{0,14}$/, 'the "next" of the page before')
    .transform(Number)
    .optional(),
  limit: z
    .string()
    .refine((text) => /^[1-9]\d{0,2}$/.test(text) && Number(text) <= MOST_ITEMS, `a whole number from 1 to ${MOST_ITEMS}`)
    .transform(Number)
    .optional(),
};

/** A page of items; `next` asks for the one after, null at the end. */
export const pageOf = <Item extends z.ZodType>(item: Item) =>
  z.strictObject({ items: z.array(item).max(MOST_ITEMS), next: z.string().nullable() });
