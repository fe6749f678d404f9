import { quadtree, type Quadtree } from 'd3';

/**
 * What finds the mark at a point of the screen.
 *
 * @param rows of the marks
 * @param x where a row's mark stands, px
 * @param y the same down
 */
export const pickingTree = (rows: readonly number[], x: (row: number) => number, y: (row: number) => number): Quadtree<number> =>
  quadtree<number>(rows.slice(), x, y);
