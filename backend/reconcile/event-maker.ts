import { CODE_RIGHT } from '#shared/reconcile/code';
import { emptyRecord, KINDS, type ReconciledRecord, type RecordFault, takeNames, takeReading } from '#shared/reconcile/record';
import { quoted } from '#shared/quoted';
import { emptyEvents } from '#shared/relativity/events';
import { timeVarianceNs2 } from '#shared/relativity/time-error';
import { compareInstants, type Instant } from '#shared/time/instant';
import { createTaiWriter } from '#shared/time/format';
import { createReadingParser, type Reading, type ReadingFault, readingFaultText } from '#shared/time/reading';
import { type SiteRecord } from '#shared/contract/site-record';
import { readTaiPair, TAI_PAIR_RIGHT } from '#shared/time/tai-pair';
import { type NetworkInForce, type RunInForce, runAt, type SiteInForce, type VersionInForce } from './network-in-force';

/** Why a record of a site's stream is set aside by itself, whenever it comes. */
export type EventFault = RecordFault | 'outside-ephemeris';

/** The texts of a record from which its event is computed. */
export type MeasuredTexts = Pick<SiteRecord, 'series' | 'sequence' | 'kind' | 'reading' | 'readingForm' | 'sigmaNs' | 'amplitude'>;

/** An event as computed, with what it rests on; written into the same object again and again. */
export interface MadeEvent extends ReconciledRecord {
  /** Row of the site's delay and place in the error tables. */
  versionRow: number;
  versionId: number;
  /** null for an exact clock. */
  segmentId: number | null;
  referenceVersionId: number | null;
  runId: number;
  xM: number;
  yM: number;
  zM: number;
  sigmaNs: number;
}

export const emptyMadeEvent = (): MadeEvent => ({
  ...emptyRecord(),
  versionRow: 0,
  versionId: 0,
  segmentId: null,
  referenceVersionId: null,
  runId: 0,
  xM: 0,
  yM: 0,
  zM: 0,
  sigmaNs: 0,
});

/** The one way from a site's record to an event. */
export interface EventMaker {
  /**
   * @param site one of the network's
   * @param texts of the record
   * @param into is written, its names as soon as they are good
   * @returns undefined, or the first fault
   */
  make(site: SiteInForce, texts: MeasuredTexts, into: MadeEvent): EventFault | undefined;
  /** A sentence for whoever mends a record: what is wrong, and what would be right. `into` is as `make` left it. */
  faultText(fault: EventFault, site: SiteInForce, texts: MeasuredTexts, into: MadeEvent): string;
}

type Parser = (text: string) => Reading | ReadingFault;

/**
 * Makes the way from records to events by what is in force.
 *
 * A version of a site holds for readings (on the time axis, nothing taken off) from its beginning on; the segment is chosen by reading less
 * delay, the run by the event's time. The numbers are those of the batch command, bit for bit.
 */
export function createEventMaker(network: NetworkInForce): EventMaker {
  const { errors, runs, tables } = network;
  const parsers = new Map<VersionInForce, Parser>();
  const place = new Float64Array(3);
  const alone = { ...emptyEvents(1), count: 1, version: new Uint16Array(1) };

  function parserOf(version: VersionInForce): Parser | undefined {
    if (version.scale === undefined) return undefined;
    const known = parsers.get(version);
    if (known) return known;
    const parser = createReadingParser(version.scale, tables.leapSeconds);
    parsers.set(version, parser);
    return parser;
  }

  const read = (version: VersionInForce, texts: MeasuredTexts): Reading | ReadingFault | 'outside-ephemeris' => {
    const parser = parserOf(version);
    if (!parser || !version.itrsM) return 'outside-ephemeris';
    return texts.readingForm === 'tai-pair' ? readTaiPair(texts.reading) : parser(texts.reading);
  };

  /** The latest version that holds at the reading as it reads it itself; else the fault that the latest one finds. */
  function versionOf(site: SiteInForce, texts: MeasuredTexts): { version: VersionInForce; reading: Reading } | EventFault {
    let fault: EventFault | undefined;
    for (let at = site.versions.length - 1; at >= 0; at--) {
      const version = site.versions[at];
      if (!version) break;
      const reading = read(version, texts);
      if (typeof reading === 'string') fault ??= reading;
      else if (compareInstants(version.from, reading) <= 0) return { version, reading };
    }
    return fault ?? 'before-clock-record';
  }

  function putPlace(version: VersionInForce, run: RunInForce, into: MadeEvent): void {
    const [x, y, z] = version.itrsM ?? [0, 0, 0];
    run.rotation.placeInto(x, y, z, into.taiS, into.ps, place, 0);
    into.xM = place[0] ?? 0;
    into.yM = place[1] ?? 0;
    into.zM = place[2] ?? 0;
  }

  function putSigma(into: MadeEvent): void {
    alone.site[0] = into.site;
    alone.version[0] = into.versionRow;
    alone.readingSigmaNs[0] = into.readingSigmaNs;
    alone.segment[0] = into.segment;
    alone.sinceEpochDays[0] = into.sinceEpochDays;
    into.sigmaNs = Math.sqrt(timeVarianceNs2(alone, errors.tables(), 0));
  }

  return {
    make(site, texts, into) {
      into.site = site.row;
      const unnamed = takeNames(texts, into);
      if (unnamed) return unnamed;
      const held = versionOf(site, texts);
      if (typeof held === 'string') return held;
      const { version, reading } = held;
      const sizes = { sigma: texts.sigmaNs, amplitude: texts.amplitude };
      const ground = { readingSigmaNs: version.readingSigmaNs, clock: version.clock, firstSegmentRow: version.clockId === null ? -1 : 0 };
      const unsure = takeReading(reading, sizes, ground, into);
      if (unsure) return unsure;
      const run = runAt(runs, into);
      if (!run) return 'outside-run';
      const holds = Math.max(0, into.segment);
      const stated = version.segments[holds];
      into.segment = version.segmentRows[holds] ?? -1;
      into.versionRow = version.row;
      into.versionId = version.id;
      into.segmentId = stated?.id ?? null;
      into.referenceVersionId = stated?.referenceVersionId ?? null;
      into.runId = run.id;
      putPlace(version, run, into);
      putSigma(into);
      return undefined;
    },
    faultText: (fault, site, texts, into) => eventFaultText(fault, network, site, { texts, made: into }),
  };
}

const toText = (instant: Instant): string => `${createTaiWriter()(instant)} TAI`;

function runsText(runs: readonly RunInForce[]): string {
  if (runs.length === 0) return 'the network has no run yet';
  const spans = runs.map(({ code, from, to }) => `${code} from ${toText(from)} ${to ? `to ${toText(to)}` : 'on'}`);
  return `the runs are ${spans.join('; ')}`;
}

function beforeRecordText(site: SiteInForce): string {
  const [version] = site.versions;
  if (!version) return `nothing is stated of the site ${site.code} yet; a version with its place, delay and clock is needed`;
  const [first] = version.segments;
  if (!first) return `the clock of ${site.code} has no record yet; a segment that holds at the reading is needed`;
  return `the reading is before all that is stated of ${site.code}: its clock's record holds from ${toText(first.segment.from)} on`;
}

function eventFaultText(
  fault: EventFault,
  { runs }: NetworkInForce,
  site: SiteInForce,
  { texts, made }: { texts: MeasuredTexts; made: MadeEvent },
): string {
  const scale = site.versions.findLast((version) => version.scale !== undefined)?.scale ?? 'UTC';
  switch (fault) {
    case 'columns':
      return 'the record has not the columns of its log';
    case 'site':
      return 'the record names a site that does not exist';
    case 'sequence':
      return `sequence ${quoted(texts.sequence)}; it must be a whole number of 0 or more, digits alone`;
    case 'series':
      return `series ${quoted(texts.series)}; it must be empty or ${CODE_RIGHT}`;
    case 'kind':
      return `kind ${quoted(texts.kind)}; it must be empty or one of ${KINDS.join(', ')}`;
    case 'sigma':
      return `sigma_ns ${quoted(texts.sigmaNs)}; it must be empty or a finite number of nanoseconds, 0 or more`;
    case 'amplitude':
      return `amplitude ${quoted(texts.amplitude)}; it must be empty or a finite number`;
    case 'before-clock-record':
      return beforeRecordText(site);
    case 'outside-run':
      return `the event is at ${toText(made)}; ${runsText(runs)}`;
    case 'outside-ephemeris':
      return `${site.code} has no place at the reading; an ephemeris that covers it is needed`;
    default:
      return texts.readingForm === 'tai-pair' && fault === 'reading-form'
        ? `reading ${quoted(texts.reading)}: not of the form ${TAI_PAIR_RIGHT}`
        : readingFaultText(fault, texts.reading, scale);
  }
}
