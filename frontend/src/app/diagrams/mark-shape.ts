import { type IntervalClass } from '#shared/relativity/verdict';

/** What a mark says of its event: a class against the selected one, the selected one itself, or nothing. */
export type MarkKind = IntervalClass | 'selected' | 'plain';

/** Marks as numbers in columns: the place in this list. */
export const MARK_KINDS = ['plain', 'timelike', 'spacelike', 'undecided', 'selected'] as const satisfies readonly MarkKind[];

export const kindNumber = (kind: MarkKind): number => MARK_KINDS.indexOf(kind);

/** Half the height of a usual mark, px. */
export const MARK_PX = 6;

/**
 * The outline of a mark about a point, as the path of an SVG or a canvas: tall lozenge timelike, wide lozenge spacelike, circle undecided and
 * plain.
 *
 * @param half size, px: half the height of a circle
 */
export function markPath(kind: MarkKind, x: number, y: number, half: number): string {
  const p = (value: number): string => value.toFixed(1);
  if (kind === 'timelike') {
    const [w, h] = [half * 0.8, half * 1.3];
    return `M${p(x)} ${p(y - h)}L${p(x + w)} ${p(y)}L${p(x)} ${p(y + h)}L${p(x - w)} ${p(y)}Z`;
  }
  if (kind === 'spacelike') {
    const [w, h] = [half * 1.3, half * 0.8];
    return `M${p(x)} ${p(y - h)}L${p(x + w)} ${p(y)}L${p(x)} ${p(y + h)}L${p(x - w)} ${p(y)}Z`;
  }
  const r = half * (kind === 'selected' ? 1.15 : kind === 'plain' ? 0.42 : 0.92);
  return `M${p(x - r)} ${p(y)}a${p(r)} ${p(r)} 0 1 0 ${p(2 * r)} 0a${p(r)} ${p(r)} 0 1 0 ${p(-2 * r)} 0Z`;
}
