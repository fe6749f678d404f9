/** When two triggers of different sites are near. */
export type CoincidenceWindow =
  | {
      readonly kind: 'light-time';
      /** Signal speed in c, above 0: near when |dt| <= distance / (speedC c) + marginNs + sigmas * sigma_gap. */
      readonly speedC: number;
      /** >= 0. */
      readonly marginNs: number;
    }
  | {
      readonly kind: 'fixed';
      /** >= 0; near when |dt| in the window's frame <= widthNs. */
      readonly widthNs: number;
      /** Code of the frame in which the time difference is taken, at the earlier of the two. */
      readonly frame: string;
    };

/** What makes a coincidence: a maximal set of triggers, at most one of each site, each pair of which is near. */
export interface CoincidenceRule {
  readonly code: string;
  /** Least number of sites, at least 2. */
  readonly minimumFold: number;
  /** Standard errors that make a decision. */
  readonly sigmas: number;
  readonly window: CoincidenceWindow;
}
