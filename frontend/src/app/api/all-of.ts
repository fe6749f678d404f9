/** No list that is shown whole has more pages than this: 20,000 items. */
const MOST_PAGES = 100;

interface Page<Item> {
  readonly items: readonly Item[];
  readonly next: string | null;
}

/**
 * All items of a list, page by page.
 *
 * @param ask for one page, by its query
 */
export async function allOf<Item>(ask: (query: { cursor?: number; limit: number }) => Promise<Page<Item>>): Promise<Item[]> {
  const items: Item[] = [];
  let cursor: string | null = null;
  for (let page = 0; page < MOST_PAGES; page++) {
    const came: Page<Item> = await ask({ limit: 200, ...(cursor !== null && { cursor: Number(cursor) }) });
    items.push(...came.items);
    cursor = came.next;
    if (cursor === null) break;
  }
  return items;
}
