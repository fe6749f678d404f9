import { type Instant } from '#shared/time/instant';

/** The file of a recorded data folder in which acknowledgements are written down; no part of the folder otherwise. */
export const ACKNOWLEDGED = 'acknowledged';

/** What was acknowledged at a place of the record, a line each. */
export type Acknowledged =
  /** Contents of records of a site, as hashes. */
  | { readonly siteId: number; readonly contents: readonly string[] }
  /** A site is complete up to here. */
  | { readonly siteId: number; readonly completeTo: Instant }
  /** The number of a change's audit entry. */
  | { readonly audited: number };
