/** What names an event for ever, whatever becomes of its time. */
export interface EventIdentity {
  /** Row of the site; rows are in the order of the sites' codes. */
  readonly site: number;
  /** Name of the numbering, empty unless the site had to start anew. */
  readonly series: string;
  /** A whole number as text, without leading zeros. */
  readonly sequence: string;
}

/** An identity as one text, different for different identities; series hold no colon. */
export const identityText = ({ site, series, sequence }: EventIdentity): string => `${site}:${series}:${sequence}`;

/** The order of events at one instant: site, series (by code unit), sequence (as a number of any length). */
export function compareIdentities(a: EventIdentity, b: EventIdentity): number {
  if (a.site !== b.site) return a.site - b.site;
  if (a.series !== b.series) return a.series < b.series ? -1 : 1;
  if (a.sequence.length !== b.sequence.length) return a.sequence.length - b.sequence.length;
  return a.sequence < b.sequence ? -1 : a.sequence > b.sequence ? 1 : 0;
}
