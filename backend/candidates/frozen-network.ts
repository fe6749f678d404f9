import { type NetworkFile } from '#shared/contract/network-file';
import { type Outcome, problemOf, valueOf } from '#shared/outcome';
import { createTaiWriter } from '#shared/time/format';
import { compareInstants, type Instant } from '#shared/time/instant';
import { type Db } from '../db';
import { type FileFrame } from '../reconcile/frames-in-force';
import { segmentById, type SiteVersion, versionById, versionsInForce } from '../reconcile/version-rows';
import { part, rowsOf } from '../search/query';
import { type GroundedRecord } from './grounded-records';

interface RunRow {
  name: string;
  from_tai_s: number;
  from_ps: number;
  to_tai_s: number | null;
  to_ps: number | null;
}

type FileSite = NetworkFile['sites'][number];
type FileClock = NonNullable<NetworkFile['clocks']>[number];

const taiText = createTaiWriter();

/** An instant as network files state it, to the picosecond. */
export const timeText = (instant: Instant): string => `${taiText(instant)} TAI`;

/** What is the same for all events unless their network is being computed anew. */
export function oneOf<T>(values: readonly T[], what: string): Outcome<T> {
  const [first, ...others] = new Set(values);
  return first === undefined || others.length > 0
    ? problemOf(
        'events-in-change',
        'events',
        `rest on more than one ${what}: they are being computed anew, and can be frozen when that is done`,
      )
    : valueOf(first);
}

/** The stretch from the first of the events' runs to the end of the last. */
export function runOf(db: Db, runIds: readonly number[]): NetworkFile['run'] {
  const runs = rowsOf<RunRow>(
    db,
    part(
      'SELECT name, from_tai_s, from_ps, to_tai_s, to_ps FROM runs WHERE id IN (SELECT value FROM json_each(?)) ORDER BY from_tai_s, from_ps',
      JSON.stringify(runIds),
    ),
  );
  const [first] = runs;
  const ends = runs.map(({ to_tai_s, to_ps }) => to_tai_s !== null && { taiS: to_tai_s, ps: to_ps ?? 0 });
  const last = ends.every((end) => end !== false) ? ends.toSorted(compareInstants).at(-1) : undefined;
  return {
    name: runs.map(({ name }) => name).join(', '),
    from: timeText({ taiS: first?.from_tai_s ?? 0, ps: first?.from_ps ?? 0 }),
    ...(last && { to: timeText(last) }),
  };
}

function fileSite(code: string, version: SiteVersion, clock: string): FileSite {
  return {
    code,
    scale: version.scale ?? 'TAI',
    clock,
    position: { itrs_m: [...(version.itrsM ?? [0, 0, 0])] },
    position_sigma_m: version.positionSigmaM,
    delay_ns: version.delayNs,
    delay_sigma_ns: version.delaySigmaNs,
    ...(version.readingSigmaNs === undefined ? {} : { reading_sigma_ns: version.readingSigmaNs }),
  };
}

/** A code for a further entry of a site that changed between two of the events. */
function entryCode(site: string, taken: ReadonlySet<string>): string {
  for (let number = 2; ; number++) {
    const code = `${site.slice(0, 18)}_${number}`;
    if (!taken.has(code)) return code;
  }
}

/** The events' sites as they rest on them, one entry for each version; and the entry of each version. */
export function sitesOf(
  db: Db,
  rows: readonly GroundedRecord[],
): { readonly sites: FileSite[]; readonly codeOf: ReadonlyMap<number, string> } {
  const codeOf = new Map<number, string>();
  const taken = new Set(rows.map(({ site }) => site));
  const named = new Set<string>();
  const sites: FileSite[] = [];
  for (const { site, siteVersionId, clock } of rows) {
    if (codeOf.has(siteVersionId)) continue;
    const code = named.has(site) ? entryCode(site, taken) : site;
    named.add(site);
    taken.add(code);
    codeOf.set(siteVersionId, code);
    sites.push(fileSite(code, versionById(db, siteVersionId), clock ?? 'exact'));
  }
  return { sites, codeOf };
}

/** Sites that frames are bound to without an event of theirs: their places alone count. */
export function baselineSites(
  db: Db,
  networkId: number,
  frames: readonly FileFrame[],
  known: readonly FileSite[],
  first: Instant,
): FileSite[] {
  const named = new Set(frames.flatMap(({ velocity }) => velocity?.toward?.baseline ?? []));
  for (const { code } of known) named.delete(code);
  const rows = rowsOf<{ id: number; code: string }>(db, part('SELECT id, code FROM sites WHERE network_id = ?', networkId));
  const versions = versionsInForce(db, networkId);
  return [...named].flatMap((code) => {
    const id = rows.find((row) => row.code === code)?.id;
    const ofSite = versions.filter(({ siteId }) => siteId === id);
    const version = ofSite.findLast(({ from }) => compareInstants(from, first) <= 0) ?? ofSite[0];
    return version ? [fileSite(code, version, 'exact')] : [];
  });
}

export function clocksOf(db: Db, rows: readonly GroundedRecord[]): FileClock[] {
  const clocks = new Map<string, Map<number, FileClock['segments'][number]>>();
  for (const { clock, segmentId, reference, referenceVersionId } of rows) {
    if (clock === null || segmentId === null) continue;
    const { segment } = segmentById(db, segmentId, referenceVersionId);
    const segments = clocks.get(clock) ?? new Map<number, FileClock['segments'][number]>();
    clocks.set(clock, segments);
    segments.set(segmentId, {
      from: timeText(segment.from),
      at: timeText(segment.at),
      offset_ns: segment.offsetNs,
      offset_sigma_ns: segment.offsetSigmaNs,
      rate_ns_per_day: segment.rateNsPerDay,
      rate_sigma_ns_per_day: segment.rateSigmaNsPerDay,
      covariance_ns2_per_day: segment.covarianceNs2PerDay,
      ...(reference === null ? {} : { reference }),
    });
  }
  return [...clocks].map(([code, segments]) => ({ code, segments: [...segments.values()] }));
}

export function referencesOf(rows: readonly GroundedRecord[]): Outcome<NonNullable<NetworkFile['references']>> {
  const sigmas = new Map<string, number>();
  for (const { reference, referenceSigmaNs } of rows) {
    if (reference === null) continue;
    const known = sigmas.get(reference);
    const one = oneOf([known ?? referenceSigmaNs ?? 0, referenceSigmaNs ?? 0], `version of the time reference ${reference}`);
    if (!one.ok) return one;
    sigmas.set(reference, one.value);
  }
  return valueOf([...sigmas].map(([code, sigma_ns]) => ({ code, sigma_ns })));
}
