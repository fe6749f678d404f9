import { type Readable } from 'node:stream';
import { compareText } from '#shared/compare-text';
import { type SiteWelcome } from '#shared/contract/site-socket';
import { type SiteRecord } from '#shared/contract/site-record';
import { compareInstants, type Instant } from '#shared/time/instant';
import { createReadingParser } from '#shared/time/reading';
import { SCALES } from '#shared/time/scales';
import { shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { SiteClient, SiteStreamRefused, type FinalFate } from '../site-client/site-client';
import { taiOf } from '../tables/present';
import { VERSION } from '../version';
import { blocksOf, followed, partsOf } from './feed-source';
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
  readonly input: Readable;
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
  let [isOut, wasIn] = [false, false];
  const client = new SiteClient({
    url,
    key,
    software: `skewline feed ${VERSION}`,
    onFate: (record, fate) => account.take(record, fate),
    onLink: (news) => {
      if (news.is === 'lost') say(`skewline: ${news.why}; trying again in ${(news.againInMs / 1000).toFixed(1)} s`);
      else if (isOut) say(`skewline: connected${wasIn ? ' again' : ''}`);
      wasIn ||= news.is === 'open';
      isOut = news.is === 'lost';
    },
  });
  const refused = new AbortController();
  client.refusal().catch(() => refused.abort()); // told where the client is asked next
  const over = AbortSignal.any([signal, refused.signal]);
  const stopped = new Promise<void>((resolve) => signal.addEventListener('abort', () => resolve(), { once: true }));
  try {
    const welcome = await Promise.race([client.welcome(), stopped]);
    if (!welcome) throw new Error('stopped; nothing was sent');
    if (options.complete) account = new Account(parserFor(welcome));
    progress.begin('sending, bytes', sizeBytes);
    const isWhole = await sendAll(options, { ...context, client, welcome, account, over });
    const late = new Promise<void>((resolve) => void stopped.then(() => setTimeout(resolve, FINISH_MS).unref()));
    if (isWhole && options.complete) {
      await Promise.race([client.drained(), late]);
      if (account.latest) await Promise.race([client.state({ completeTo: account.latest }), late]);
    }
    await Promise.race([client.finish(), late]);
    progress.end();
    const unanswered = client.stop();
    say(account.closingLine(unanswered));
    if (unanswered > 0 || (!isWhole && !options.follow))
      throw new Error('stopped before the end of the log; feed it again: what is known is not doubled');
  } catch (fault) {
    progress.end();
    const unanswered = client.stop();
    if (!(fault instanceof SiteStreamRefused)) throw fault;
    const told = fault.message.replace(/\.$/, '');
    throw new UsageProblem(account.isBegun ? `${told}; ${account.closingLine(unanswered)}` : told);
  }
}

interface Sending extends FeedContext {
  readonly client: SiteClient;
  readonly welcome: SiteWelcome;
  readonly account: Account;
  /** Aborted when the command is told to stop, and when the server will have no more. */
  readonly over: AbortSignal;
}

/** Sends the whole log; false when it was stopped before its end. */
async function sendAll({ log, follow, resume }: FeedOptions, sending: Sending): Promise<boolean> {
  const { client, welcome, account, over, progress, say } = sending;
  const name = log === STANDARD_INPUT ? 'standard input' : log;
  let lines = new FeedLines(name, welcome.site, say);
  let doneBytes = 0;
  const send = async (records: readonly FedRecord[]): Promise<void> => {
    for (const { record } of records) {
      if (over.aborted) return;
      if (resume && client.holds(record.series, record.sequence)) {
        account.leaveOut(record);
        continue;
      }
      account.send();
      await untilAborted(client.push(record), over);
    }
  };
  const parts = log === STANDARD_INPUT ? partsOf(sending.input, over) : follow ? followed(log, over) : blocksOf(log);
  for await (const part of parts) {
    if (over.aborted) return false;
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
  if (over.aborted) return false;
  await send(lines.end());
  return true;
}

/** Waits for the work or the signal, and leaves nothing behind on the signal: a race with one promise would keep a little of every record. */
async function untilAborted(work: Promise<void>, signal: AbortSignal): Promise<void> {
  let leave = (): void => undefined;
  const aborted = new Promise<void>((resolve) => (leave = resolve));
  signal.addEventListener('abort', leave);
  try {
    await Promise.race([work, aborted]);
  } finally {
    signal.removeEventListener('abort', leave);
  }
}

/** What was read, sent, and what became of it. */
class Account {
  /** The latest reading that the server has, as the site's own clock and scale have it; of what is set aside none counts. */
  latest: Instant | undefined;
  private readonly counts = { sent: 0, stored: 0, known: 0, unsendable: 0 };
  private heldAlready = 0;
  private readonly leapSeconds = shippedLeapSeconds();
  private readonly setAside = new Map<string, number>();
  private firstUnsendable = '';

  /** @param parse reads readings, where the latest is asked for */
  constructor(private readonly parse?: ReturnType<typeof createReadingParser>) {}

  get isBegun(): boolean {
    return this.counts.sent > 0 || this.heldAlready > 0;
  }

  leaveOut(record: SiteRecord): void {
    this.heldAlready++;
    this.lookBack(record);
  }

  send(): void {
    this.counts.sent++;
  }

  take(record: SiteRecord, fate: FinalFate): void {
    if (fate.fate === 'set-aside') this.setAside.set(fate.reason, (this.setAside.get(fate.reason) ?? 0) + 1);
    else this.counts[fate.fate]++;
    if (fate.fate === 'stored') this.look(record);
    else if (fate.fate === 'known') this.lookBack(record);
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

  /** A record that the server had before may be set aside there: one of the future says nothing of what is complete. */
  private lookBack(record: SiteRecord): void {
    if (this.parse) this.look(record, taiOf(Date.now(), this.leapSeconds));
  }

  private look({ reading }: SiteRecord, most?: Instant): void {
    const found = this.parse?.(reading);
    if (found === undefined || typeof found === 'string' || (most && compareInstants(found, most) > 0)) return;
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
  if (URL.canParse(text) && /^https?:$/.test(new URL(text).protocol)) {
    const { origin, href } = new URL(text);
    if (href === `${origin}/`) return origin;
    throw new UsageProblem(
      `--server: ${JSON.stringify(text)} has more than scheme, host and port; it must be the address alone: ${origin}`,
    );
  }
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
