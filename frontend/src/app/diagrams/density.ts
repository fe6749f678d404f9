/** How many events lie in each cell of a grid over a box. */
export interface Density {
  readonly columns: number;
  readonly rows: number;
  readonly counts: Uint32Array;
  readonly most: number;
}

/**
 * Counts points by cells.
 *
 * @param count of points
 * @param x of a point from the box's left edge, px; @param y from its top
 * @param size of the box and of a cell, px
 */
export function densityOf(
  count: number,
  x: (i: number) => number,
  y: (i: number) => number,
  { width, height, cell }: { readonly width: number; readonly height: number; readonly cell: number },
): Density {
  const columns = Math.max(1, Math.ceil(width / cell));
  const rows = Math.max(1, Math.ceil(height / cell));
  const counts = new Uint32Array(columns * rows);
  let most = 0;
  for (let i = 0; i < count; i++) {
    const column = Math.floor(x(i) / cell);
    const row = Math.floor(y(i) / cell);
    if (column < 0 || column >= columns || row < 0 || row >= rows) continue;
    const at = row * columns + column;
    const now = (counts[at] ?? 0) + 1;
    counts[at] = now;
    if (now > most) most = now;
  }
  return { columns, rows, counts, most };
}

const FAINTEST = 0.18;

/** How strongly a cell is inked, 0 to 1: by the logarithm, so that one event is still seen beside thousands. */
export const inkOf = (count: number, most: number): number =>
  count === 0 ? 0 : most <= 1 ? 1 : FAINTEST + (1 - FAINTEST) * (Math.log(count) / Math.log(most));
