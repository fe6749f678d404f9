import { type Instant, secondsBetween } from '#shared/time/instant';

const BUCKET_S = 3_600;

/**
 * Remembers, hour by hour, how far the errors of a network's events carry, so that a search of a stretch knows how much around it can matter:
 * a day with a doubtful clock widens the searches that it reaches, and no others. Never shrinks.
 */
export class ReachHistory {
  /** The farthest that one standard error of any of the network's places carries, ns. */
  placeNs = 0;
  private readonly mostSigmaNs = new Map<number, number>();

  /** Takes note of an event, by all its time errors together. */
  add(taiS: number, sigmaNs: number): void {
    const bucket = Math.floor(taiS / BUCKET_S);
    const most = this.mostSigmaNs.get(bucket);
    if (most === undefined || sigmaNs > most) this.mostSigmaNs.set(bucket, sigmaNs);
  }

  /** How far, in time, one standard error of the events from one instant to another carries, time and place together, ns. */
  within(from: Instant, to: Instant): number {
    return this.around(from, to, () => 0);
  }

  /**
   * The same for all events that may matter to a stretch.
   *
   * @param windowNs how far apart an event that carries so far and one of the stretch may be and still be near
   */
  around(from: Instant, to: Instant, windowNs: (carriesNs: number) => number): number {
    let farthest = 0;
    for (const [bucket, most] of this.mostSigmaNs) {
      const carriesNs = most + this.placeNs;
      if (carriesNs <= farthest) continue;
      const begin = { taiS: bucket * BUCKET_S, ps: 0 };
      const end = { taiS: (bucket + 1) * BUCKET_S, ps: 0 };
      const apartS = Math.max(0, secondsBetween(end, from), secondsBetween(to, begin));
      // A second of slack exceeds all rounding.
      if ((apartS - 1) * 1e9 <= windowNs(carriesNs)) farthest = carriesNs;
    }
    return farthest;
  }
}
