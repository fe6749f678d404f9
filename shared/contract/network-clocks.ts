import { type NetworkFile } from './network-file';
import { type Outcome, problemOf, type Problem, valueOf } from '../outcome';
import { type ErrorTables } from '../relativity/events';
import { type ClockRecord, type ClockSegment } from '../time/clock-record';
import { compareInstants, type Instant } from '../time/instant';
import { type LeapSecondTable } from '../time/leap-seconds';
import { timeAt } from './network-times';

/** A clock's record and the row of its first segment among all segments. */
export interface ClockRow {
  readonly record: ClockRecord;
  readonly firstRow: number;
}

/** All clocks of a network; segments of one clock stand together. */
export interface ClockRows {
  readonly byCode: ReadonlyMap<string, ClockRow>;
  readonly segments: readonly ClockSegment[];
}

type FileSegment = NonNullable<NetworkFile['clocks']>[number]['segments'][number];

interface ClockContext {
  readonly table: LeapSecondTable;
  readonly references: ReadonlySet<string>;
  readonly warnings: Problem[];
}

function readTime(text: string, path: string, context: ClockContext): Outcome<Instant> {
  const time = timeAt(text, path, context.table);
  if (time.ok) context.warnings.push(...time.warnings);
  return time;
}

function readSegment(segment: FileSegment, path: string, context: ClockContext): Outcome<ClockSegment> {
  const from = readTime(segment.from, `${path}.from`, context);
  if (!from.ok) return from;
  const at = segment.at === undefined ? from : readTime(segment.at, `${path}.at`, context);
  if (!at.ok) return at;
  if (segment.reference !== undefined && !context.references.has(segment.reference)) {
    const known = [...context.references].map((code) => `"${code}"`).join(', ');
    const right = known === '' ? 'left out, since no references are listed' : `one of ${known}`;
    return problemOf('network-reference', `${path}.reference`, `is "${segment.reference}"; it must be ${right}`);
  }
  return valueOf({
    from: from.value,
    at: at.value,
    offsetNs: segment.offset_ns,
    offsetSigmaNs: segment.offset_sigma_ns,
    rateNsPerDay: segment.rate_ns_per_day ?? 0,
    rateSigmaNsPerDay: segment.rate_sigma_ns_per_day ?? 0,
    covarianceNs2PerDay: segment.covariance_ns2_per_day ?? 0,
    ...(segment.reference === undefined ? {} : { reference: segment.reference }),
  });
}

function readClock(segments: readonly FileSegment[], path: string, context: ClockContext): Outcome<ClockRecord> {
  const record: { segment: ClockSegment; path: string }[] = [];
  for (const [at, segment] of segments.entries()) {
    const read = readSegment(segment, `${path}.segments[${at}]`, context);
    if (!read.ok) return read;
    record.push({ segment: read.value, path: `${path}.segments[${at}].from` });
  }
  record.sort((a, b) => compareInstants(a.segment.from, b.segment.from));
  for (const [at, { segment, path: where }] of record.entries()) {
    const next = record[at + 1];
    if (next && compareInstants(segment.from, next.segment.from) === 0)
      return problemOf('network-segment', next.path, `is the same instant as ${where}; each segment must begin at an instant of its own`);
  }
  return valueOf(record.map(({ segment }) => segment));
}

/**
 * Reads the clock records of a network file; segments may stand in any order.
 *
 * @returns the clocks; or the first problem: a time, a reference that is not listed, two segments that begin at one instant, a clock that is
 *   called `exact`
 */
export function readClocks(file: NetworkFile, table: LeapSecondTable): Outcome<ClockRows> {
  const warnings: Problem[] = [];
  const context: ClockContext = { table, references: new Set((file.references ?? []).map(({ code }) => code)), warnings };
  const byCode = new Map<string, ClockRow>();
  const segments: ClockSegment[] = [];
  for (const [at, clock] of (file.clocks ?? []).entries()) {
    if (clock.code === 'exact')
      return problemOf('network-clock', `clocks[${at}].code`, 'is "exact"; that word means a clock without error and cannot name another');
    const record = readClock(clock.segments, `clocks[${at}]`, context);
    if (!record.ok) return record;
    byCode.set(clock.code, { record: record.value, firstRow: segments.length });
    segments.push(...record.value);
  }
  return valueOf({ byCode, segments }, warnings);
}

/** The tables that events' errors refer to: sites in the order given, segments in the clocks' order, references as listed. */
export function errorTablesOf(file: NetworkFile, sites: readonly { readonly code: string }[], clocks: ClockRows): ErrorTables {
  const fileSites = new Map(file.sites.map((site) => [site.code, site]));
  const references = file.references ?? [];
  const { segments } = clocks;
  return {
    siteDelaySigmaNs: Float64Array.from(sites, ({ code }) => fileSites.get(code)?.delay_sigma_ns ?? 0),
    sitePositionSigmaM: Float64Array.from(sites, ({ code }) => fileSites.get(code)?.position_sigma_m ?? 0),
    segmentOffsetSigmaNs: Float64Array.from(segments, (segment) => segment.offsetSigmaNs),
    segmentRateSigmaNsPerDay: Float64Array.from(segments, (segment) => segment.rateSigmaNsPerDay),
    segmentCovarianceNs2PerDay: Float64Array.from(segments, (segment) => segment.covarianceNs2PerDay),
    segmentReference: Int32Array.from(segments, ({ reference }) => references.findIndex(({ code }) => code === reference)),
    referenceSigmaNs: Float64Array.from(references, ({ sigma_ns }) => sigma_ns ?? 0),
  };
}
