import { type CoincidenceBrief } from '#shared/contract/coincidence';

/** A row of the table of coincidences: one, and behind it those that share events with it. */
export interface FoldedRow {
  readonly first: CoincidenceBrief;
  readonly others: readonly CoincidenceBrief[];
}

/**
 * Coincidences that share events, folded into one row each: the one of the greatest fold stands for all, where the first of them stood.
 *
 * @param coincidences in any order, which the rows keep
 */
export function foldSets(coincidences: readonly CoincidenceBrief[]): FoldedRow[] {
  const leader = new Map<number, number>(); // of each place in the list; union-find with halved paths
  const find = (place: number): number => {
    let at = place;
    for (let up = leader.get(at); up !== undefined && up !== at; up = leader.get(at)) {
      leader.set(at, leader.get(up) ?? up);
      at = up;
    }
    return at;
  };
  const holder = new Map<number, number>();
  coincidences.forEach(({ members }, place) => {
    leader.set(place, place);
    for (const { eventId } of members) {
      const known = holder.get(eventId);
      if (known === undefined) {
        holder.set(eventId, place);
        continue;
      }
      const [a, b] = [find(known), find(place)];
      leader.set(Math.max(a, b), Math.min(a, b));
    }
  });
  const groups = new Map<number, CoincidenceBrief[]>();
  coincidences.forEach((coincidence, place) => {
    const at = find(place);
    groups.set(at, [...(groups.get(at) ?? []), coincidence]);
  });
  return [...groups.values()].map((group) => {
    const first = group.reduce((best, one) => (one.fold > best.fold ? one : best));
    return { first, others: group.filter((one) => one !== first) };
  });
}
