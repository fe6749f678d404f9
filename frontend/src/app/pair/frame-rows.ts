import { type Frame } from '#shared/contract/frame-routes';
import { type PairsOfSet } from '#shared/contract/pair-routes';
import { dot, norm } from '#shared/relativity/vector';
import { paceText } from './pair-figures';
import { type PairSeen } from './pair-seen';

/** A pair in one frame of its network. */
export interface FrameRow {
  readonly code: string;
  readonly name: string;
  /** How fast it is and where it goes, in words. */
  readonly note: string;
  /** In the geocentric frame, along the baseline from a to b, in c. */
  readonly alongC: number;
  readonly dtNs: number;
  readonly sigmaNs: number;
  readonly order: 'a' | 'b' | 'tie';
}

const nameOf = (frame: Frame | undefined): string | undefined => (frame?.name === '' ? undefined : frame?.name);

export const GEOCENTRIC = 'geocentric';

/** The order of a pair frame by frame: the geocentric one first, then those that are pinned, then the others. */
export function frameRows({ frames }: PairsOfSet, seen: PairSeen, known: readonly Frame[]): readonly FrameRow[] {
  const rows = frames.map(({ code, gamma, gammaBeta }, at): FrameRow & { readonly place: number } => {
    const frame = known.find((one) => one.code === code);
    const speedC = norm(gammaBeta) / gamma;
    const order = seen.pair.orders[at];
    return {
      code,
      name: code === GEOCENTRIC ? 'Geocentric' : (nameOf(frame) ?? code),
      note: code === GEOCENTRIC ? 'non-rotating' : paceText(speedC),
      alongC: seen.toward ? dot(gammaBeta, seen.toward) / gamma : 0,
      dtNs: order?.dtNs ?? 0,
      sigmaNs: order?.sigmaNs ?? 0,
      order: order?.order ?? 'tie',
      place: code === GEOCENTRIC ? -1 : (frame?.pinned ?? frames.length + at + 100),
    };
  });
  return rows.sort((one, other) => one.place - other.place).map(({ place: _, ...row }) => row);
}
