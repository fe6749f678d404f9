import { type NetworkFile, parseNetworkFile } from '#shared/contract/network-file';
import { timeAt } from '#shared/contract/network-times';
import { geodeticToItrs } from '#shared/earth/ellipsoid';
import { type Outcome } from '#shared/outcome';
import { type Instant } from '#shared/time/instant';
import { shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { type Db } from '../../backend/db';
import { keepShippedLeapSeconds } from '../../backend/reconcile/tables-in-force';

const AT = '2026-03-01T00:00:00.000Z';
const EVER_TAI_S = Number.MIN_SAFE_INTEGER;
const leapSeconds = shippedLeapSeconds();

function good<T>(outcome: Outcome<T>): T {
  if (!outcome.ok) throw new Error(`${outcome.problem.where}: ${outcome.problem.text}`);
  return outcome.value;
}

const instant = (text: string): Instant => good(timeAt(text, 'time', leapSeconds));

/** A network of the database, with the ids of its parts by their codes. */
export interface NetworkRows {
  readonly networkId: number;
  readonly siteIds: ReadonlyMap<string, number>;
  readonly clockIds: ReadonlyMap<string, number>;
  readonly frameIds: ReadonlyMap<string, number>;
}

/** A row as columns and values; answers its id. */
export function insertRow(db: Db, table: string, row: Readonly<Record<string, string | number | null>>): number {
  const names = Object.keys(row);
  const query = `INSERT INTO ${table} (${names.join(', ')}) VALUES (${names.map(() => '?').join(', ')})`;
  return Number(db.$client.prepare(query).run(...Object.values(row)).lastInsertRowid);
}

export function insertSegment(
  db: Db,
  clockId: number,
  at: number,
  segment: NonNullable<NetworkFile['clocks']>[number]['segments'][number],
  referenceId: number | null,
): number {
  const from = instant(segment.from);
  const epoch = segment.at === undefined ? from : instant(segment.at);
  return insertRow(db, 'clock_segments', {
    clock_id: clockId,
    segment: at,
    number: 1,
    from_tai_s: from.taiS,
    from_ps: from.ps,
    at_tai_s: epoch.taiS,
    at_ps: epoch.ps,
    offset_ns: segment.offset_ns,
    offset_sigma_ns: segment.offset_sigma_ns,
    rate_ns_per_day: segment.rate_ns_per_day ?? 0,
    rate_sigma_ns_per_day: segment.rate_sigma_ns_per_day ?? 0,
    covariance_ns2_per_day: segment.covariance_ns2_per_day ?? 0,
    reference_id: referenceId,
    origin: 'certificate',
    created_at: AT,
  });
}

function insertSite(db: Db, networkId: number, clockIds: ReadonlyMap<string, number>, site: NetworkFile['sites'][number]): number {
  const id = insertRow(db, 'sites', { network_id: networkId, code: site.code, name: site.name ?? '', created_at: AT });
  const { geodetic } = site.position;
  const itrsM = geodetic
    ? geodeticToItrs({ latitudeDeg: geodetic.latitude_deg, longitudeDeg: geodetic.longitude_deg, heightM: geodetic.height_m ?? 0 })
    : site.position.itrs_m!;
  insertRow(db, 'site_versions', {
    site_id: id,
    number: 1,
    from_tai_s: EVER_TAI_S,
    from_ps: 0,
    scale: site.scale,
    clock_id: clockIds.get(site.clock) ?? null,
    exact_clock: site.clock === 'exact' ? 1 : 0,
    position_kind: geodetic ? 'geodetic' : 'itrs',
    latitude_deg: geodetic?.latitude_deg ?? null,
    longitude_deg: geodetic?.longitude_deg ?? null,
    height_m: geodetic ? (geodetic.height_m ?? 0) : null,
    itrs_x_m: itrsM[0],
    itrs_y_m: itrsM[1],
    itrs_z_m: itrsM[2],
    position_sigma_m: site.position_sigma_m ?? 0,
    delay_ns: site.delay_ns ?? 0,
    delay_sigma_ns: site.delay_sigma_ns ?? 0,
    reading_sigma_ns: site.reading_sigma_ns ?? null,
    origin: 'survey',
    created_at: AT,
  });
  return id;
}

function insertFrames(db: Db, networkId: number, siteIds: ReadonlyMap<string, number>, file: NetworkFile): ReadonlyMap<string, number> {
  const ids = new Map<string, number>();
  for (const [at, { code, name }] of (file.frames ?? []).entries())
    ids.set(code, insertRow(db, 'frames', { network_id: networkId, code, name: name ?? '', pinned: at + 1, created_at: AT }));
  for (const frame of file.frames ?? []) {
    const { toward, ...speed } = frame.velocity ?? {};
    const baseline = toward?.baseline;
    insertRow(db, 'frame_versions', {
      frame_id: ids.get(frame.code)!,
      number: 1,
      parent_id: frame.parent === undefined || frame.parent === 'geocentric' ? null : ids.get(frame.parent)!,
      kind: frame.velocity ? (baseline ? 'toward-baseline' : 'velocity') : 'barycentric',
      at: frame.at ?? 'event',
      definition: JSON.stringify(baseline || !toward ? speed : { ...speed, toward }),
      from_site_id: baseline ? siteIds.get(baseline[0])! : null,
      to_site_id: baseline ? siteIds.get(baseline[1])! : null,
      created_at: AT,
    });
  }
  return ids;
}

/** Puts a network as files have it into the database, with the shipped leap-second list in force. */
export function insertNetwork(db: Db, input: unknown, code = 'net'): NetworkRows {
  const file = good(parseNetworkFile(input));
  keepShippedLeapSeconds(db, Date.parse(AT));
  const from = instant(file.run.from);
  const to = file.run.to === undefined ? undefined : instant(file.run.to);
  const origin = file.origin?.time === undefined ? from : instant(file.origin.time);
  const networkId = insertRow(db, 'networks', {
    code,
    name: file.network,
    origin_tai_s: origin.taiS,
    origin_ps: origin.ps,
    created_at: AT,
  });
  insertRow(db, 'runs', {
    network_id: networkId,
    code: 'run',
    name: file.run.name ?? '',
    from_tai_s: from.taiS,
    from_ps: from.ps,
    to_tai_s: to?.taiS ?? null,
    to_ps: to?.ps ?? null,
    created_at: AT,
  });
  const referenceIds = new Map<string, number>();
  for (const { code: reference, sigma_ns } of file.references ?? []) {
    const id = insertRow(db, 'time_references', { network_id: networkId, code: reference, name: '', created_at: AT });
    insertRow(db, 'time_reference_versions', { reference_id: id, number: 1, sigma_ns: sigma_ns ?? 0, created_at: AT });
    referenceIds.set(reference, id);
  }
  const clockIds = new Map<string, number>();
  for (const clock of file.clocks ?? []) {
    const id = insertRow(db, 'clocks', { network_id: networkId, code: clock.code, name: '', created_at: AT });
    clockIds.set(clock.code, id);
    for (const [at, segment] of clock.segments.entries())
      insertSegment(db, id, at + 1, segment, segment.reference === undefined ? null : referenceIds.get(segment.reference)!);
  }
  const siteIds = new Map(file.sites.map((site) => [site.code, insertSite(db, networkId, clockIds, site)]));
  return { networkId, siteIds, clockIds, frameIds: insertFrames(db, networkId, siteIds, file) };
}

/** Somebody who may decide; the same at the second asking. */
export const personRow = (db: Db): number =>
  db.$client.prepare<[], number>('SELECT id FROM people LIMIT 1').pluck().get() ??
  insertRow(db, 'people', { email: 'ada@example.org', name: 'Ada', created_at: AT });
