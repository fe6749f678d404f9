/** Of so many rows at most the ids are told. */
const MOST_IDS = 100;

/** Rows that a change is of: all their ids where they are few, else how many, and the least and the greatest. */
export type NotedRows = { readonly ids: readonly number[] } | { readonly count: number; readonly from: number; readonly to: number };

/** The rows of a change of kind `records` that a search made. */
export interface CoincidenceNote {
  readonly coincidences: { readonly appeared: NotedRows; readonly ended: NotedRows; readonly final: NotedRows };
  /** How many triggers became crowded, or are so no more, or otherwise. */
  readonly crowded: number;
  /** All that changes up to this number brought has been searched; absent where that did not move. */
  readonly searchedTo?: number;
}

export function notedRows(ids: readonly number[]): NotedRows {
  if (ids.length <= MOST_IDS) return { ids };
  let from = Infinity;
  let to = 0;
  for (const id of ids) {
    from = Math.min(from, id);
    to = Math.max(to, id);
  }
  return { count: ids.length, from, to };
}
