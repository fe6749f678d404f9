import { compareText } from '#shared/compare-text';
import { type SiteWelcome } from '#shared/contract/site-socket';
import { type SiteRecord } from '#shared/contract/site-record';
import { compareInstants, type Instant } from '#shared/time/instant';
import { createReadingParser } from '#shared/time/reading';
import { SCALES } from '#shared/time/scales';
import { shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { SiteClient, SiteStreamRefused, type FinalFate } from '../site-client/site-client';
import { VERSION } from '../version';
import { blocksOf, followed } from './feed-source';
import { FeedLines, type FedRecord } from './feed-lines';
import { grouped, type Progress } from './progress';
import { checkReadable, readOption } from './readable-file';
import { UsageProblem } from './usage-problem';

const FINISH_MS = 5_000; // what is on its way may take so long once the command is told to stop
const STANDARD_INPUT = '-';

/** What the command line asks for. */
export interface FeedOptions {
  readonly server: string;
  readonly keyFile?: string | undefined;
  /** `-` for standard input. */
  readonly log: string;
  readonly follow: boolean;
  readonly complete: boolean;
  /** Leaves out what the server holds by number. */
  readonly resume: boolean;
}

/** The world around the command. */
export interface FeedContext {
  readonly env: Readonly<Record<string, string | undefined>>;
  readonly input: AsyncIterable<Buffer>;
  readonly signal: AbortSignal;
  readonly progress: Progress;
  readonly say: (line: string) => void;
}

/**
 * Streams a log to a server, as the site whose key is given, until each record is known to be in its database: through lost links and restarts
 * of the server, without losing or doubling one.
 *
 * @throws UsageProblem for arguments, a log or a key that cannot be used
 */
export async function feed(options: FeedOptions, context: FeedContext): Promise<void> {
  const { progress, say, signal } = context;
  const url = serverOf(options.server);
  const key = keyOf(options, context.env);
  if (options.follow && options.log === STANDARD_INPUT)
    throw new UsageProblem('--follow: standard input is followed by itself; name a file');
  const sizeBytes = options.log === STANDARD_INPUT ? 0 : checkReadable(options.log);
  let account = new Account();
  const client = new SiteClient({
    url,
    key,
    software: `skewline feed ${VERSION}`,
    onFate: (record, fate) => account.take(record, fate),
    onLink: (news) => {
      if (news.is === 'lost') say(`skewline: ${news.why}; trying again in ${(news.againInMs / 1000).toFixed(1)} s`);
    },
  });
  const stopped = new Promise<void>((resolve) => signal.addEventListener('abort', () => resolve(), { once: true }));
  try {
    const welcome = await Promise.race([client.welcome(), stopped]);
    if (!welcome) throw new Error('stopped; nothing was sent');
    if (options.complete) account = new Account(parserFor(welcome));
    progress.begin('sending, bytes', sizeBytes);
    const isWhole = await sendAll(options, { ...context, client, welcome, account, stopped });
    const late = new Promise<void>((resolve) => void stopped.then(() => setTimeout(resolve, FINISH_MS).unref()));
    if (isWhole && account.latest) await Promise.race([client.state({ completeTo: account.latest }), stopped]);
    await Promise.race([client.finish(), late]);
    progress.end();
    const unanswered = client.stop();
    say(account.closingLine(unanswered));
    if (unanswered > 0 || (!isWhole && !options.follow))
      throw new Error('stopped before the end of the log; feed it again: what is known is not doubled');
  } catch (fault) {
    progress.end();
    client.stop();
    throw fault instanceof SiteStreamRefused ? new UsageProblem(fault.message) : fault;
  }
}

interface Sending extends FeedContext {
  readonly client: SiteClient;
  readonly welcome: SiteWelcome;
  readonly account: Account;
  readonly stopped: Promise<void>;
}

/** Sends the whole log; false when it was stopped before its end. */
async function sendAll({ log, follow, resume }: FeedOptions, sending: Sending): Promise<boolean> {
  const { client, welcome, account, signal, progress, say, stopped } = sending;
  const name = log === STANDARD_INPUT ? 'standard input' : log;
  let lines = new FeedLines(name, welcome.site, say);
  let doneBytes = 0;
  const send = async (records: readonly FedRecord[]): Promise<void> => {
    for (const { record } of records) {
      if (signal.aborted) return;
      if (resume && client.holds(record.series, record.sequence)) {
        account.leaveOut(record);
        continue;
      }
      account.send(record);
      await Promise.race([client.push(record), stopped]);
    }
  };
  const parts = log === STANDARD_INPUT ? sending.input : follow ? followed(log, signal) : blocksOf(log);
  for await (const part of parts) {
    if (signal.aborted) return false;
    if (Buffer.isBuffer(part)) {
      await send(lines.add(part));
      progress.at((doneBytes += part.length));
      continue;
    }
    const isLost = part.isCutShort && lines.isWithinLine;
    say(`skewline: ${name}: ${part.beginsAnew}: read from its start${isLost ? '; the line that had begun is not sent' : ''}`);
    if (!part.isCutShort) await send(lines.end());
    lines = new FeedLines(name, welcome.site, say);
  }
  if (signal.aborted) return false;
  await send(lines.end());
  return true;
}

/** What was read, sent, and what became of it. */
class Account {
  /** The latest reading, as the site's own clock and scale have it. */
  latest: Instant | undefined;
  private readonly counts = { sent: 0, stored: 0, known: 0, unsendable: 0 };
  private heldAlready = 0;
  private readonly setAside = new Map<string, number>();
  private firstUnsendable = '';

  /** @param parse reads readings, where the latest is asked for */
  constructor(private readonly parse?: ReturnType<typeof createReadingParser>) {}

  leaveOut(record: SiteRecord): void {
    this.heldAlready++;
    this.look(record);
  }

  send(record: SiteRecord): void {
    this.counts.sent++;
    this.look(record);
  }

  take(record: SiteRecord, fate: FinalFate): void {
    if (fate.fate === 'set-aside') this.setAside.set(fate.reason, (this.setAside.get(fate.reason) ?? 0) + 1);
    else this.counts[fate.fate]++;
    if (fate.fate === 'unsendable') this.firstUnsendable ||= `the record ${record.sequence.slice(0, 40)}: ${fate.detail}`;
  }

  closingLine(unanswered: number): string {
    const { sent, stored, known, unsendable } = this.counts;
    const reasons = [...this.setAside].sort(([a], [b]) => compareText(a, b));
    const setAside = reasons.reduce((total, [, count]) => total + count, 0);
    const byReason = reasons.map(([reason, count]) => `${reason} ${grouped(count)}`).join(', ');
    return [
      `${grouped(sent)} sent: ${grouped(stored)} stored, ${grouped(known)} known already, ${grouped(setAside)} set aside`,
      byReason && ` (${byReason})`,
      unanswered > 0 && `, ${grouped(unanswered)} without an answer`,
      this.heldAlready > 0 && `; ${grouped(this.heldAlready)} left out, since the server holds their numbers`,
      unsendable > 0 && `; ${grouped(unsendable)} could not be sent (${this.firstUnsendable})`,
    ]
      .filter((part) => part !== false)
      .join('');
  }

  private look({ reading }: SiteRecord): void {
    const found = this.parse?.(reading);
    if (found === undefined || typeof found === 'string') return;
    if (!this.latest || compareInstants(found, this.latest) > 0) this.latest = { taiS: found.taiS, ps: found.ps };
  }
}

/** Reads readings of the site's scale, for who must say up to when it is complete. */
function parserFor({ scale, site }: SiteWelcome): ReturnType<typeof createReadingParser> {
  const known = SCALES.find((one) => one === scale);
  if (known) return createReadingParser(known, shippedLeapSeconds());
  throw new UsageProblem(`--complete: the readings of ${site} are in the scale ${scale}, of which this command makes no instants`);
}

function serverOf(text: string): string {
  if (URL.canParse(text) && /^https?:$/.test(new URL(text).protocol)) return new URL(text).origin;
  throw new UsageProblem(
    `--server: ${JSON.stringify(text)} cannot be used; it must be the server's address, such as http://127.0.0.1:4210`,
  );
}

function keyOf({ keyFile }: FeedOptions, env: FeedContext['env']): string {
  const key = (keyFile === undefined ? (env['SKEWLINE_SITE_KEY'] ?? '') : readOption('--key-file', keyFile)).trim();
  if (key !== '') return key;
  throw new UsageProblem(
    keyFile === undefined
      ? "the site's key is missing: name its file with --key-file, or set SKEWLINE_SITE_KEY"
      : `--key-file: ${keyFile} is empty; it must hold the site's key, such as swk_...`,
  );
}
