import { and, asc, desc, eq, gt, inArray, isNull } from 'drizzle-orm';
import { type HeldRole } from '#shared/contract/roles';
import { type Site, type SitePosition, type SiteStream, type SiteVersion } from '#shared/contract/site-routes';
import { itrsToGeodetic } from '#shared/earth/ellipsoid';
import { compareInstants, type Instant } from '#shared/time/instant';
import { clocks, siteStreams, sites, siteVersions } from '#schema/schema';
import { EVER_TAI_S } from '#schema/forms';
import { ownSites } from '../accounts/sites-seen';
import { absent } from '../api/refusal';
import { type Db } from '../db';
import { utcText } from '../ground';

type Rows = Pick<Db, 'select'>;
type SiteRow = typeof sites.$inferSelect;
type VersionRow = typeof siteVersions.$inferSelect;
type StreamRow = typeof siteStreams.$inferSelect;

/** The row of a site; refused as absent when there is none. */
export function siteRow(db: Rows, siteId: number): SiteRow {
  const row = db.select().from(sites).where(eq(sites.id, siteId)).get();
  if (!row) throw absent();
  return row;
}

/** A site with every state that it ever had, latest stated first, and the one that holds at `present`. */
export function siteOfId(db: Rows, siteId: number, present: Instant): Site {
  const versions = db
    .select()
    .from(siteVersions)
    .where(eq(siteVersions.siteId, siteId))
    .orderBy(desc(siteVersions.number))
    .all()
    .map(versionOf);
  return { ...shown(siteRow(db, siteId)), stream: streamOf(streamRow(db, siteId)), now: stateAt(versions, present) ?? null, versions };
}

const shown = ({ createdBy: _by, ...row }: SiteRow) => row;

/** The states of a site that are in force, in the order in which they begin to hold. */
export const statesInForce = (db: Rows, siteId: number): SiteVersion[] =>
  db
    .select()
    .from(siteVersions)
    .where(and(eq(siteVersions.siteId, siteId), isNull(siteVersions.supersededAt)))
    .orderBy(asc(siteVersions.fromTaiS), asc(siteVersions.fromPs))
    .all()
    .map(versionOf);

/** The sites of a network that someone sees, from behind an id on: an operator their own. */
export function sitesAfter(db: Rows, networkId: number, afterId: number, most: number, held: readonly HeldRole[], present: Instant) {
  const own = ownSites(held, networkId);
  const rows = db
    .select()
    .from(sites)
    .where(and(eq(sites.networkId, networkId), gt(sites.id, afterId), own && inArray(sites.id, [...own])))
    .orderBy(asc(sites.id))
    .limit(most)
    .all();
  const ids = rows.map(({ id }) => id);
  const inForce = db
    .select({ version: siteVersions, clockCode: clocks.code })
    .from(siteVersions)
    .leftJoin(clocks, eq(clocks.id, siteVersions.clockId))
    .where(and(inArray(siteVersions.siteId, ids), isNull(siteVersions.supersededAt)))
    .all();
  const streams = db.select().from(siteStreams).where(inArray(siteStreams.siteId, ids)).all();
  return rows.map(({ id, code, name, closedAt, version }) => {
    const own = inForce.filter((row) => row.version.siteId === id);
    const now =
      stateAt(
        own.map((row) => versionOf(row.version)),
        present,
      ) ?? null;
    const clockCode = own.find((row) => row.version.id === now?.id)?.clockCode ?? null;
    const stream = streamOf(streams.find(({ siteId }) => siteId === id));
    return {
      id,
      networkId,
      code,
      name,
      closedAt,
      position: now?.position ?? null,
      details: { now, clockCode, stream, version },
    };
  });
}

/** The latest of the states in force that has begun to hold. */
function stateAt(versions: readonly SiteVersion[], present: Instant): SiteVersion | undefined {
  const begun = versions.filter(
    ({ supersededAt, from }) => supersededAt === null && (from === null || compareInstants(from, present) <= 0),
  );
  return begun.reduce<SiteVersion | undefined>((last, one) => (last && compareFrom(one, last) < 0 ? last : one), undefined);
}

const compareFrom = (a: SiteVersion, b: SiteVersion): number => {
  if (a.from === null || b.from === null) return Number(a.from !== null) - Number(b.from !== null);
  return compareInstants(a.from, b.from);
};

function versionOf(row: VersionRow): SiteVersion {
  const { id, number, fromTaiS, fromPs, scale, clockId, exactClock, positionSigmaM, delayNs, delaySigmaNs, readingSigmaNs } = row;
  const { origin, note, createdAt, createdBy, supersededAt } = row;
  const from = fromTaiS === EVER_TAI_S ? null : { taiS: fromTaiS, ps: fromPs };
  return {
    id,
    number,
    from,
    scale,
    clockId,
    exactClock,
    position: positionOf(row),
    positionSigmaM,
    delayNs,
    delaySigmaNs,
    readingSigmaNs,
    origin,
    note,
    createdAt,
    createdBy,
    supersededAt,
  };
}

function positionOf({ positionKind, latitudeDeg, longitudeDeg, heightM, itrsXM, itrsYM, itrsZM }: VersionRow): SitePosition | null {
  if (positionKind === 'platform' || itrsXM === null || itrsYM === null || itrsZM === null) return null;
  const itrsM: [number, number, number] = [itrsXM, itrsYM, itrsZM];
  const isStated = latitudeDeg !== null && longitudeDeg !== null && heightM !== null;
  return { stated: positionKind, geodetic: isStated ? { latitudeDeg, longitudeDeg, heightM } : itrsToGeodetic(itrsM), itrsM };
}

const streamRow = (db: Rows, siteId: number): StreamRow | undefined =>
  db.select().from(siteStreams).where(eq(siteStreams.siteId, siteId)).get();

function streamOf(row: StreamRow | undefined): SiteStream {
  return {
    connectedSince: timeOf(row?.connectedAtMs),
    lastReceivedAt: timeOf(row?.lastReceivedAtMs),
    lastEvent: instantOf(row?.lastTaiS, row?.lastPs),
    completeUpTo: instantOf(row?.completeTaiS, row?.completePs),
  };
}

const timeOf = (ms: number | null | undefined): string | null => (typeof ms === 'number' ? utcText(ms) : null);
const instantOf = (taiS: number | null | undefined, ps: number | null | undefined): Instant | null =>
  typeof taiS === 'number' && typeof ps === 'number' ? { taiS, ps } : null;
