import { type CoincidenceInFull } from '#shared/contract/coincidence';

/** A pair by the ids of its events. */
export interface PairOfIds {
  readonly eventA: number;
  readonly eventB: number;
}

/** Where a pair stands among those of its coincidence. */
export interface Neighbours {
  /** From 1 on. */
  readonly place: number;
  readonly count: number;
  readonly before: PairOfIds | undefined;
  readonly behind: PairOfIds | undefined;
}

/** The pairs before and behind one in its coincidence; undefined where it is none of it. */
export function neighboursOf({ members, pairs }: CoincidenceInFull, eventA: number, eventB: number): Neighbours | undefined {
  const idAt = new Map(members.map(({ place, eventId }) => [place, eventId]));
  const all = pairs.flatMap(({ a, b }): PairOfIds[] => {
    const [first, second] = [idAt.get(a), idAt.get(b)];
    return first === undefined || second === undefined ? [] : [{ eventA: first, eventB: second }];
  });
  const at = all.findIndex((pair) => [pair.eventA, pair.eventB].every((id) => id === eventA || id === eventB));
  if (at < 0) return undefined;
  return { place: at + 1, count: all.length, before: all[at - 1], behind: all[at + 1] };
}
