import { type HeldSeries, type Runs, type SiteState, type SiteStateKept } from '#shared/contract/site-socket';
import { type Outcome } from '#shared/outcome';
import { type SiteRecord } from '#shared/contract/site-record';

/** Who sends: by which key, and for which site of which network. */
export interface SiteSender {
  readonly keyId: number;
  readonly siteId: number;
  readonly networkId: number;
}

/** What is held of a site when it says hello. */
export interface HeldOfSite {
  /** By which the desk knows the connection. */
  readonly connectionId: number;
  readonly series: readonly HeldSeries[];
  /** Whether there are more numberings or ranges than `series` says. */
  readonly more: boolean;
  readonly completeTo: SiteStateKept['completeTo'];
}

/** What became of each row of a batch: every row in exactly one of the lists. */
export interface BatchFates {
  readonly stored: Runs;
  readonly known: Runs;
  readonly setAside: readonly { readonly row: number; readonly reason: string; readonly detail: string }[];
  readonly unknown: Runs;
}

/**
 * Who keeps what sites send. Each promise settles after the commit that holds the answer; one that rejects means that nobody knows, so that
 * the site must send again.
 */
export interface SiteDesk {
  readonly hello: (sender: SiteSender, software: string) => Promise<HeldOfSite>;
  readonly batch: (sender: SiteSender, records: readonly SiteRecord[]) => Promise<BatchFates>;
  /** Gives the instant to which the site is complete now, or the problem with what it said. */
  readonly state: (sender: SiteSender, state: SiteState) => Promise<Outcome<SiteStateKept['completeTo']>>;
  /** A connection is no more, and why. */
  readonly bye: (connectionId: number, why: string) => Promise<void>;
}
