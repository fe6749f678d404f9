import { type EventBrief } from '#shared/contract/event-routes';
import { emptyEvents, type ErrorTables, type EventColumns } from '#shared/relativity/events';
import { pairOf } from '#shared/relativity/pair';
import { verdictOf } from '#shared/relativity/verdict';
import { compareInstants, type Instant } from '#shared/time/instant';
import { kindNumber } from '../diagrams/mark-shape';

/** A site as the desk has it: its row is its place in this list. */
export interface ShownSite {
  readonly id: number;
  readonly code: string;
  readonly name: string;
  /** 0 where it is not told. */
  readonly positionSigmaM: number;
}

/** Events on the desk: their columns in time order, and beside each row what it was made from. */
export interface ShownEvents {
  readonly columns: EventColumns;
  readonly briefs: readonly EventBrief[];
  readonly rowOf: ReadonlyMap<number, number>;
  /** Each event's site, as its place from left to right. */
  readonly sites: readonly ShownSite[];
}

/** Events as columns; those of sites that are not among `sites` are left out. */
export function showEvents(events: readonly EventBrief[], sites: readonly ShownSite[]): ShownEvents {
  const siteRow = new Map(sites.map(({ id }, row) => [id, row]));
  const briefs = events.filter(({ siteId }) => siteRow.has(siteId)).sort((a, b) => compareInstants(a.at, b.at) || a.id - b.id);
  const columns: EventColumns = { ...emptyEvents(briefs.length), count: briefs.length };
  briefs.forEach(({ siteId, at, placeM, sigmaNs }, row) => {
    columns.taiS[row] = at.taiS;
    columns.ps[row] = at.ps;
    columns.xM[row] = placeM[0];
    columns.yM[row] = placeM[1];
    columns.zM[row] = placeM[2];
    columns.site[row] = siteRow.get(siteId) ?? 0;
    columns.readingSigmaNs[row] = sigmaNs;
    columns.sigmaNs[row] = sigmaNs;
  });
  return { columns, briefs, rowOf: new Map(briefs.map(({ id }, row) => [id, row])), sites };
}

export const NO_EVENTS: ShownEvents = showEvents([], []);

/**
 * The class of each event against one of them as far as the list tells: with all errors taken as independent, which decides less and never
 * otherwise. What the server says of a pair, which knows the terms that two events share, goes before it.
 *
 * @param row of the event that they are compared with
 * @param sigmas standard errors that make a decision
 * @returns kinds of marks, by `MARK_KINDS`
 */
export function kindsAgainst({ columns, sites }: ShownEvents, row: number, sigmas: number): Uint8Array {
  const kinds = new Uint8Array(columns.count);
  const errors = independentErrors(sites);
  for (let i = 0; i < columns.count; i++) {
    if (i === row) continue;
    // The earlier stands first; at one instant either does.
    const [a, b] = isBefore(columns, i, row) ? [i, row] : [row, i];
    kinds[i] = kindNumber(verdictOf(pairOf(columns, errors, a, b), sigmas).class);
  }
  if (row >= 0) kinds[row] = kindNumber('selected');
  return kinds;
}

const isBefore = (columns: EventColumns, a: number, b: number): boolean =>
  ((columns.taiS[a] ?? 0) - (columns.taiS[b] ?? 0) || (columns.ps[a] ?? 0) - (columns.ps[b] ?? 0)) < 0;

/** Errors of which nothing is shared: each event's own, and its site's place. */
function independentErrors(sites: readonly ShownSite[]): ErrorTables {
  const none = new Float64Array(0);
  return {
    siteDelaySigmaNs: new Float64Array(sites.length),
    sitePositionSigmaM: Float64Array.from(sites, ({ positionSigmaM }) => positionSigmaM),
    segmentOffsetSigmaNs: none,
    segmentRateSigmaNsPerDay: none,
    segmentCovarianceNs2PerDay: none,
    segmentReference: new Int32Array(0),
    referenceSigmaNs: none,
  };
}

/** The instant of a row. */
export const instantOfRow = ({ columns }: ShownEvents, row: number): Instant => ({
  taiS: columns.taiS[row] ?? 0,
  ps: columns.ps[row] ?? 0,
});
