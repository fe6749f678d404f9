/**
 * A page of rows that were asked for with one more than it holds: the extra one says that there is a next page.
 *
 * @param rows at most limit + 1
 * @param limit the most items of the page
 * @param placeOf what the next page begins behind
 */
export function pageFrom<Row>(rows: readonly Row[], limit: number, placeOf: (row: Row) => number): { items: Row[]; next: string | null } {
  const items = rows.slice(0, limit);
  const last = items.at(-1);
  return { items, next: rows.length > limit && last !== undefined ? String(placeOf(last)) : null };
}
