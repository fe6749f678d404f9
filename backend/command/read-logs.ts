import { basename } from 'node:path';
import { type LeapSecondTable } from '#shared/time/leap-seconds';
import { createReconciler, emptyRecord, type RecordLayout } from '#shared/reconcile/record';
import { type Network } from '#shared/reconcile/network';
import { addCell, columnSeed, type ContentHash } from './content-hash';
import { readRecords } from './log-file';
import { type Pace } from './pace';
import { checkReadable } from './readable-file';
import { RecordStore } from './record-store';
import { type ReadLog } from './set-aside-table';
import { UsageProblem } from './usage-problem';

/** A log named on the command line; `site` for one that has no column for it. */
export interface LogArgument extends ReadLog {
  readonly site: string | undefined;
  readonly sizeBytes: number;
}

const NEEDED = ['sequence', 'reading'] as const;
const SITE_ARGUMENT = /^([A-Za-z0-9_-]{1,24})=(.+)$/s;
/** Files are counted in 16 bits. */
const MOST_LOGS = 65_535;

/** The file that a log argument names. */
export const logPath = (text: string): string => SITE_ARGUMENT.exec(text)?.[2] ?? text;

/**
 * Reads the log arguments: `LOG.csv`, or `ORL=LOG.csv` for a log without a site column.
 *
 * @returns one entry an argument; a site that does not exist or a file that cannot be read is a usage problem
 */
export function logArguments(texts: readonly string[], network: Network): readonly LogArgument[] {
  if (texts.length > MOST_LOGS) throw new UsageProblem(`${texts.length} logs; at most ${MOST_LOGS} are read at once`);
  const codes = new Set(network.sites.map(({ code }) => code));
  return texts.map((text) => {
    const site = SITE_ARGUMENT.exec(text)?.[1];
    if (site !== undefined && !codes.has(site))
      throw new UsageProblem(`${text}: "${site}" is no site of the network; before the = stands one of ${[...codes].join(', ')}`);
    const path = logPath(text);
    return { path, name: basename(path), site, sizeBytes: checkReadable(path) };
  });
}

/** What is known of a log from its header. */
export interface LogHeader {
  readonly layout: RecordLayout;
  /** For the content of each column; undefined for the site's, which belongs to the identity. */
  readonly seeds: readonly (ContentHash | undefined)[];
}

/**
 * What a header says of the columns.
 *
 * @param fields of the first record
 * @param log its path and name for messages, and the site of a log that needs no column for it
 * @param line on which it stands
 * @throws UsageProblem for one that cannot be used
 */
export function headerOf(fields: readonly string[], log: Pick<LogArgument, 'path' | 'name' | 'site'>, line: number): LogHeader {
  const fault = (text: string): UsageProblem => new UsageProblem(`${log.path}: line ${line}: ${text}`);
  const doubled = fields.find((name, at) => fields.indexOf(name) !== at);
  if (doubled !== undefined) throw fault(`the column ${JSON.stringify(doubled)} stands twice; each column needs a name of its own`);
  const [only = '', ...others] = fields;
  const separator = [';', '\t'].find((character) => others.length === 0 && only.includes(character));
  if (separator !== undefined)
    throw fault(`the header ${JSON.stringify(only)} has ${separator === ';' ? 'semicolons' : 'tabs'}; fields must be separated by commas`);
  const needed = log.site === undefined ? 'site, sequence and reading' : 'sequence and reading';
  for (const name of NEEDED) {
    if (!fields.includes(name)) throw fault(`the header ${JSON.stringify(fields.join(','))} has no column ${name}; needed are ${needed}`);
  }
  if (!fields.includes('site') && log.site === undefined)
    throw fault(`the header ${JSON.stringify(fields.join(','))} has no column site; name the site as in ORL=${log.name}`);
  return {
    layout: {
      width: fields.length,
      site: fields.indexOf('site'),
      sequence: fields.indexOf('sequence'),
      series: fields.indexOf('series'),
      reading: fields.indexOf('reading'),
      sigma: fields.indexOf('sigma_ns'),
      amplitude: fields.indexOf('amplitude'),
      kind: fields.indexOf('kind'),
      ofSite: log.site,
    },
    seeds: fields.map((name) => (name === 'site' ? undefined : columnSeed(name))),
  };
}

/** A header whose quotes are broken. */
export const brokenHeader = (path: string, line: number): UsageProblem =>
  new UsageProblem(
    `${path}: line ${line}: a quote in the header is not closed, or followed by something else than a comma; the header must be whole`,
  );

/** A log without a header. */
export const emptyLog = (path: string): UsageProblem =>
  new UsageProblem(`${path}: is empty; its first line must be a header such as site,sequence,reading,sigma_ns,amplitude`);

/** Room is made at once for this many records at most; logs of more let the columns grow. */
const MOST_EXPECTED = 20_000_000;

const BROKEN: readonly string[] = [];

/**
 * Reads all logs into a store: each record is accepted, or set aside with its reason.
 *
 * @param watch the pace, who is told of the bytes read, and who hears of what is doubtful
 * @returns the store, not yet finished; a log without a usable header is a usage problem
 */
export async function readLogs(
  logs: readonly LogArgument[],
  network: Network,
  leapSeconds: LeapSecondTable,
  watch: { pace: Pace; onBytes: (done: number) => void; warn: (text: string) => void },
): Promise<RecordStore> {
  const store = new RecordStore(network.sites.length);
  const reconcile = createReconciler(network, leapSeconds);
  const record = emptyRecord();
  const content = { first: 0, second: 0 };
  const allBytes = logs.reduce((bytes, { sizeBytes }) => bytes + sizeBytes, 0);
  let doneBytes = 0;
  let records = 0;
  let isExpected = false;
  for (const [file, log] of logs.entries()) {
    let header: LogHeader | undefined;
    const swallowed = await readRecords(
      log.path,
      (fields, place, isWhole) => {
        if (!header) {
          if (!isWhole) throw brokenHeader(log.path, place.line);
          header = headerOf(fields, log, place.line);
          return;
        }
        records++;
        record.site = -1;
        const fault = reconcile(isWhole ? fields : BROKEN, header.layout, record);
        if (fault) {
          store.setAside(fault, record.site, file, place);
          return;
        }
        content.first = 0;
        content.second = 0;
        for (let column = 0; column < fields.length; column++) {
          const seed = header.seeds[column];
          if (seed) addCell(seed, fields[column] ?? '', content);
        }
        store.put(record, content, file, place);
      },
      {
        pace: watch.pace,
        onBytes: (bytes) => {
          doneBytes += bytes;
          if (!isExpected) store.expect(Math.min(MOST_EXPECTED, Math.ceil((records / doneBytes) * allBytes)));
          isExpected = true;
          watch.onBytes(doneBytes);
        },
      },
    );
    if (swallowed)
      watch.warn(
        `${log.path}: line ${swallowed.line}: ${swallowed.why}: everything from there to the end of the file is one record, set aside`,
      );
    if (!header) throw emptyLog(log.path);
  }
  return store;
}
