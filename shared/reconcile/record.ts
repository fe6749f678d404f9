import { isCode } from './code';
import { daysSinceAt, eventInstant, restOfDaysSinceAt, segmentAt } from '../time/correction';
import { compareInstants } from '../time/instant';
import { type LeapSecondTable } from '../time/leap-seconds';
import { createReadingParser, type Reading, type ReadingFault, resolutionSigmaNs } from '../time/reading';
import { type Network, type NetworkSite } from './network';

/** Why a record is set aside by itself, in the order in which the reasons are looked for. */
export type RecordFault =
  'columns' | 'site' | 'sequence' | 'series' | 'kind' | ReadingFault | 'sigma' | 'amplitude' | 'before-clock-record' | 'outside-run';

/** Why a record is set aside: a fault of its own, or another content under the same identity. */
export type SetAsideReason = RecordFault | 'conflict';

/** All reasons, in the order in which a record is looked at. */
export const SET_ASIDE_REASONS: readonly SetAsideReason[] = [
  'columns',
  'site',
  'sequence',
  'series',
  'kind',
  'reading-empty',
  'reading-form',
  'date',
  'time-of-day',
  'no-leap-second',
  'before-1972',
  'sigma',
  'amplitude',
  'before-clock-record',
  'outside-run',
  'conflict',
];

/** What a record is: triggers form coincidences, pulses of known origin and tests do not. */
export const KINDS = ['trigger', 'reference', 'test'] as const;
export type Kind = (typeof KINDS)[number];

/** Where the standard error of a reading comes from. */
export const SIGMA_SOURCES = ['record', 'site', 'resolution'] as const;

/** Where a log has the fields that mean something; -1 for a column that it does not have. */
export interface RecordLayout {
  readonly width: number;
  readonly site: number;
  readonly sequence: number;
  readonly series: number;
  readonly reading: number;
  readonly sigma: number;
  readonly amplitude: number;
  readonly kind: number;
  /** The site of a log that names it once for all its records. */
  readonly ofSite: string | undefined;
}

/** A record as reconciled: when, how sure, and by what; written into the same object again and again, since millions pass. */
export interface ReconciledRecord {
  /** Row of the site in the network. */
  site: number;
  series: string;
  /** The sequence without leading zeros. */
  sequence: string;
  /** Index in KINDS. */
  kind: number;
  taiS: number;
  ps: number;
  readingSigmaNs: number;
  /** Index in SIGMA_SOURCES. */
  sigmaSource: number;
  /** Row of the clock segment in the error tables, -1 for an exact clock. */
  segment: number;
  sinceEpochDays: number;
  sinceEpochRestDays: number;
  /** NaN where none is given. */
  amplitude: number;
}

export const emptyRecord = (): ReconciledRecord => ({
  site: 0,
  series: '',
  sequence: '',
  kind: 0,
  taiS: 0,
  ps: 0,
  readingSigmaNs: 0,
  sigmaSource: 0,
  segment: -1,
  sinceEpochDays: 0,
  sinceEpochRestDays: 0,
  amplitude: NaN,
});

const WHOLE_NUMBER = /^\d+$/;
const NUMBER = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/;

/** What a record says of itself before its reading is looked at. */
export interface RecordNames {
  readonly sequence: string;
  readonly series: string;
  readonly kind: string;
}

/** The texts by which a record says how sure it is, and how strong its pulse was. */
export interface RecordSizes {
  readonly sigma: string;
  readonly amplitude: string;
}

/** What one site's readings are turned into events by. */
export type ReadingGround = Pick<NetworkSite, 'readingSigmaNs' | 'clock' | 'firstSegmentRow'>;

/** A field as a finite number, or NaN. */
function numberOf(text: string): number {
  const value = NUMBER.test(text) ? Number(text) : NaN;
  return Number.isFinite(value) ? value : NaN;
}

function withoutLeadingZeros(digits: string): string {
  if (digits.length === 1 || digits.charCodeAt(0) !== 48) return digits;
  return digits.replace(/^0+(?=\d)/, '');
}

/**
 * Takes in what names a record: its sequence, series and kind.
 *
 * @returns undefined with the names written into `into`, or the first fault
 */
export function takeNames({ sequence, series, kind }: RecordNames, into: ReconciledRecord): RecordFault | undefined {
  if (!WHOLE_NUMBER.test(sequence)) return 'sequence';
  if (series !== '' && !isCode(series)) return 'series';
  const kindIndex = kind === '' ? 0 : KINDS.findIndex((name) => name === kind);
  if (kindIndex < 0) return 'kind';
  into.sequence = withoutLeadingZeros(sequence);
  into.series = series;
  into.kind = kindIndex;
  return undefined;
}

/**
 * Turns a reading into the time of an event: delay and clock record taken off, with the errors that go with it. The run is not looked at.
 *
 * @param reading on the time axis
 * @returns undefined with time and errors written into `into`, or the first fault
 */
export function takeReading(reading: Reading, sizes: RecordSizes, ground: ReadingGround, into: ReconciledRecord): RecordFault | undefined {
  const sigmaNs = sizes.sigma === '' ? (ground.readingSigmaNs ?? resolutionSigmaNs(reading.decimals)) : numberOf(sizes.sigma);
  if (!(sigmaNs >= 0)) return 'sigma';
  const amplitude = sizes.amplitude === '' ? NaN : numberOf(sizes.amplitude);
  if (sizes.amplitude !== '' && Number.isNaN(amplitude)) return 'amplitude';
  const holds = segmentAt(ground.clock, reading);
  const segment = ground.clock[holds];
  if (!segment) return 'before-clock-record';
  const instant = eventInstant(segment, reading);
  into.taiS = instant.taiS;
  into.ps = instant.ps;
  into.readingSigmaNs = Math.abs(sigmaNs); // -0 is 0
  into.sigmaSource = sizes.sigma !== '' ? 0 : ground.readingSigmaNs === undefined ? 2 : 1;
  into.segment = ground.firstSegmentRow < 0 ? -1 : ground.firstSegmentRow + holds;
  into.sinceEpochDays = into.segment < 0 ? 0 : daysSinceAt(segment, reading);
  into.sinceEpochRestDays = into.segment < 0 ? 0 : restOfDaysSinceAt(segment, reading, into.sinceEpochDays);
  into.amplitude = amplitude;
  return undefined;
}

/** Turns the fields of one record into an event's time, or says why the record is set aside. */
export type RecordReconciler = (fields: readonly string[], layout: RecordLayout, into: ReconciledRecord) => RecordFault | undefined;

/**
 * Makes the one way from a record of a log to the time of an event: reading, delay, clock record, run.
 *
 * The function keeps what it knows of each site's last date, and nothing else: its answer depends on the record alone.
 *
 * @param network the sites, clocks and the run
 * @param leapSeconds for readings in UTC
 * @returns a function that writes a good record into `into` and answers undefined, or answers the first fault; `into.site` is written as soon as
 *   the site is known
 */
export function createReconciler(network: Pick<Network, 'sites' | 'from' | 'to'>, leapSeconds: LeapSecondTable): RecordReconciler {
  const rows = new Map(network.sites.map((site, row) => [site.code, row]));
  const parsers = network.sites.map((site) => createReadingParser(site.scale, leapSeconds));
  const at = (fields: readonly string[], column: number): string => (column < 0 ? '' : (fields[column] ?? ''));

  function identify(fields: readonly string[], layout: RecordLayout, into: ReconciledRecord): RecordFault | undefined {
    if (fields.length !== layout.width) return 'columns';
    const code = layout.site < 0 ? layout.ofSite : at(fields, layout.site);
    const row = code === undefined || (layout.ofSite !== undefined && code !== layout.ofSite) ? undefined : rows.get(code);
    if (row === undefined) return 'site';
    into.site = row;
    return takeNames({ sequence: at(fields, layout.sequence), series: at(fields, layout.series), kind: at(fields, layout.kind) }, into);
  }

  return (fields, layout, into) => {
    const fault = identify(fields, layout, into);
    if (fault) return fault;
    const site = network.sites[into.site];
    const reading = parsers[into.site]?.(at(fields, layout.reading)) ?? 'reading-empty';
    if (!site || typeof reading === 'string') return typeof reading === 'string' ? reading : 'site';
    const sizes = { sigma: at(fields, layout.sigma), amplitude: at(fields, layout.amplitude) };
    const unsure = takeReading(reading, sizes, site, into);
    if (unsure) return unsure;
    if (compareInstants(into, network.from) < 0) return 'outside-run';
    if (network.to && compareInstants(into, network.to) > 0) return 'outside-run';
    return undefined;
  };
}
