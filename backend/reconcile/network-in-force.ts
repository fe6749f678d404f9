import { fixedSiteWorldline } from '#shared/earth/worldline';
import { type EarthRotation } from '#shared/earth/rotation';
import { compareText } from '#shared/compare-text';
import { prepareClock, type PreparedSegment } from '#shared/time/correction';
import { compareInstants, type Instant } from '#shared/time/instant';
import { type Db } from '../db';
import { type ErrorRows } from './error-rows';
import { siteWorldline, type SiteWorldline } from './site-worldline';
import { type TablesInForce, tablesInForce } from './tables-in-force';
import { clockRecordsInForce, EXACT_SEGMENTS, type SiteVersion, type StatedSegment, versionsInForce } from './version-rows';

/** A site's version made ready for its readings. */
export interface VersionInForce extends SiteVersion {
  /** Row of its delay and place in the error tables. */
  readonly row: number;
  readonly segments: readonly StatedSegment[];
  /** The same segments, with the delay taken off. */
  readonly clock: readonly PreparedSegment[];
  /** The same segments' rows in the error tables; -1 for an exact clock. */
  readonly segmentRows: readonly number[];
}

/** A site as its readings are reconciled. */
export interface SiteInForce {
  /** Place among the network's sites. */
  readonly row: number;
  readonly id: number;
  readonly code: string;
  readonly name: string;
  readonly isClosed: boolean;
  /** By the instant from which they hold. */
  readonly versions: readonly VersionInForce[];
}

/** A data-taking period; both ends belong to it. */
export interface RunInForce {
  readonly id: number;
  readonly code: string;
  readonly from: Instant;
  readonly to: Instant | undefined;
  readonly rotation: EarthRotation;
}

/** All that a network's readings become events by, as it is in force at one moment. */
export interface NetworkInForce {
  readonly id: number;
  readonly code: string;
  readonly name: string;
  readonly origin: Instant;
  readonly isClosed: boolean;
  /** Sorted by code, as the events' order wants it; closed ones too. A new site moves the rows of others. */
  readonly sites: readonly SiteInForce[];
  readonly siteById: ReadonlyMap<number, SiteInForce>;
  /** By their beginning. */
  readonly runs: readonly RunInForce[];
  readonly tables: TablesInForce;
  readonly errors: ErrorRows;
  /** By row of the site, for windows and frames; a site without a place on the ground stands at the geocentre. */
  readonly worldlines: readonly SiteWorldline[];
}

interface NetworkRow {
  id: number;
  code: string;
  name: string;
  origin_tai_s: number;
  origin_ps: number;
  closed_at: string | null;
}

interface RunRow {
  id: number;
  code: string;
  from_tai_s: number;
  from_ps: number;
  to_tai_s: number | null;
  to_ps: number | null;
}

interface SiteRow {
  id: number;
  code: string;
  name: string;
  closed_at: string | null;
}

function runsOf(db: Db, networkId: number, tables: TablesInForce): readonly RunInForce[] {
  const query = 'SELECT id, code, from_tai_s, from_ps, to_tai_s, to_ps FROM runs WHERE network_id = ? ORDER BY from_tai_s, from_ps';
  return db.$client
    .prepare<[number], RunRow>(query)
    .all(networkId)
    .map((row) => {
      const from = { taiS: row.from_tai_s, ps: row.from_ps };
      const to = row.to_tai_s === null ? undefined : { taiS: row.to_tai_s, ps: row.to_ps ?? 0 };
      return { id: row.id, code: row.code, from, to, rotation: tables.rotationFor(from) };
    });
}

/** The run to which an instant belongs: of two that meet or overlap, the one that begins later. */
export function runAt(runs: readonly RunInForce[], instant: Instant): RunInForce | undefined {
  for (let at = runs.length - 1; at >= 0; at--) {
    const run = runs[at];
    if (run && compareInstants(run.from, instant) <= 0 && (!run.to || compareInstants(instant, run.to) <= 0)) return run;
  }
  return undefined;
}

function worldlineOf(site: SiteInForce, rotation: EarthRotation): SiteWorldline {
  const stretches = site.versions.map(({ from, itrsM = [0, 0, 0] }) => ({ from, line: fixedSiteWorldline(itrsM, rotation) }));
  return siteWorldline(stretches.length > 0 ? stretches : [{ from: { taiS: 0, ps: 0 }, line: fixedSiteWorldline([0, 0, 0], rotation) }]);
}

/**
 * Reads what is in force of a network.
 *
 * @param db any connection
 * @param networkId of the network
 * @param errors rows given so far, which go on; a reader that keeps nothing hands in new ones
 * @returns sites, clock records, runs, tables, or undefined where there is no such network
 */
export function networkInForce(db: Db, networkId: number, errors: ErrorRows): NetworkInForce | undefined {
  const network = db.$client
    .prepare<[number], NetworkRow>('SELECT id, code, name, origin_tai_s, origin_ps, closed_at FROM networks WHERE id = ?')
    .get(networkId);
  if (!network) return undefined;
  const tables = tablesInForce(db);
  const runs = runsOf(db, networkId, tables);
  const records = clockRecordsInForce(db, networkId);
  const versions = versionsInForce(db, networkId);
  const sites = db.$client
    .prepare<[number], SiteRow>('SELECT id, code, name, closed_at FROM sites WHERE network_id = ?')
    .all(networkId)
    .sort((a, b) => compareText(a.code, b.code))
    .map(({ id, code, name, closed_at }, row): SiteInForce => ({
      row,
      id,
      code,
      name,
      isClosed: closed_at !== null,
      versions: versions.filter(({ siteId }) => siteId === id).map((version) => prepareVersion(version, records, errors)),
    }));
  const origin = { taiS: network.origin_tai_s, ps: network.origin_ps };
  const rotation = runs[0]?.rotation ?? tables.rotationFor(origin);
  return {
    id: networkId,
    code: network.code,
    name: network.name,
    origin,
    isClosed: network.closed_at !== null,
    sites,
    siteById: new Map(sites.map((site) => [site.id, site])),
    runs,
    tables,
    errors,
    worldlines: sites.map((site) => worldlineOf(site, rotation)),
  };
}

function prepareVersion(version: SiteVersion, records: ReadonlyMap<number, readonly StatedSegment[]>, errors: ErrorRows): VersionInForce {
  const segments = version.clockId === null ? EXACT_SEGMENTS : (records.get(version.clockId) ?? []);
  return {
    ...version,
    row: errors.versionRow(version),
    segments,
    clock: prepareClock(
      segments.map(({ segment }) => segment),
      version.delayNs,
    ),
    segmentRows: segments.map((segment) => errors.segmentRow(segment)),
  };
}
