import { packRecords } from '#shared/contract/record-batch';
import {
  siteFates,
  siteStateKept,
  type Runs,
  type SiteFates,
  type SiteRefusal,
  type SiteState,
  type SiteWelcome,
} from '#shared/contract/site-socket';
import { type SiteRecord } from '#shared/contract/site-record';
import { heldBy } from './held-by';
import { RETRY_BOUNDS, retryDelayMs, type RetryBounds } from './retry-delay';
import { openLink, sumOf, type LinkEnd, type SiteLink } from './site-link';
import { utf8 } from './utf8';

const BATCH_RECORDS = 500;
const MOST_UNANSWERED_RECORDS = 4_000;
const MOST_UNANSWERED_CHARACTERS = 4 * 1024 * 1024;
const MOST_ON_THE_WAY = 8; // batches
const CLOSES_UNTIL_ALONE = 3;
const MOST_CLOSES = 20;
const PAUSE_MS = 2_000;

/** What became of a record in the end. */
export type FinalFate =
  | { readonly fate: 'stored' | 'known' }
  | { readonly fate: 'set-aside'; readonly reason: string; readonly detail: string }
  /** No message can hold it, or the server takes none that does. */
  | { readonly fate: 'unsendable'; readonly detail: string };

/** How the link is. */
export type LinkNews =
  { readonly is: 'open'; readonly welcome: SiteWelcome } | { readonly is: 'lost'; readonly why: string; readonly againInMs: number };

export interface SiteClientOptions {
  /** Scheme, host and port of the server. */
  readonly url: string;
  readonly key: string;
  /** Name and version of what sends. */
  readonly software: string;
  readonly onFate?: (record: SiteRecord, fate: FinalFate) => void;
  readonly onLink?: (news: LinkNews) => void;
  /** Time between attempts to connect. */
  readonly retry?: RetryBounds;
}

/** The stream ended for good: the key was refused, or the two do not understand each other. The message is for people. */
export class SiteStreamRefused extends Error {}

interface Batch {
  readonly records: readonly SiteRecord[];
  readonly packed: Uint8Array;
  /** How often a link was lost on it: it was the first on its way, and nothing had been answered on that link. */
  closes: number;
  /** Whether nothing else may be on its way with it, so that it is known on what the link is lost. */
  readonly isAlone: boolean;
}

interface Said {
  readonly state: SiteState;
  readonly kept: () => void;
}

/** A message that is on its way or must go again. */
type Piece = Batch | Said;

const goesAlone = (piece: Piece): boolean => 'state' in piece || piece.isAlone;
const isRecord = (entry: SiteRecord | Said): entry is SiteRecord => 'sequence' in entry;
const fits = ({ records, packed }: Batch, { credit }: SiteLink): boolean =>
  records.length <= credit.records && packed.length <= credit.bytes;

/**
 * Sends a site's records until each is known to be in the server's database: resends after a lost link or a restarted server what was not
 * answered, in a window of bounded size. Sending twice does no harm: the server knows a record by its series and sequence.
 */
export class SiteClient {
  private link: SiteLink | undefined;
  private readonly backlog: (SiteRecord | Said)[] = [];
  private again: Piece[] = [];
  private readonly sent = new Set<Piece>();
  private unansweredRecords = 0;
  private unansweredCharacters = 0;
  private number = 0;
  private answersOnLink = 0;
  private failures = 0;
  private pausedUntilMs = 0;
  private isEnding = false;
  private fault: Error | undefined;
  private pumping: NodeJS.Immediate | undefined;
  private retry: NodeJS.Timeout | undefined;
  private waiters: { readonly isMet: () => boolean; readonly resolve: () => void; readonly reject: (fault: Error) => void }[] = [];
  private firstWelcome: SiteWelcome | undefined;

  constructor(private readonly options: SiteClientOptions) {
    void this.connect();
  }

  /**
   * What the server said at the first connection: site, network, scale, what it holds.
   *
   * @throws SiteStreamRefused
   */
  async welcome(): Promise<SiteWelcome> {
    await this.until(() => this.firstWelcome !== undefined);
    if (!this.firstWelcome) throw new Error('welcomed without a welcome');
    return this.firstWelcome;
  }

  /**
   * Waits, as long as the client lasts, for the stream to end for good: for who waits for records to come meanwhile.
   *
   * @throws SiteStreamRefused
   */
  async refusal(): Promise<void> {
    await this.until(() => false);
  }

  /** Whether the server held a record of this number when the link was first opened: a reason not to send it again. */
  holds(series: string, sequence: string): boolean {
    return this.firstWelcome !== undefined && heldBy(this.firstWelcome.series, series, sequence);
  }

  /**
   * Takes a record. Wait for it before the next: it is there to hold back who has more than the link can carry.
   *
   * @throws SiteStreamRefused when the stream has ended for good
   */
  async push(record: SiteRecord): Promise<void> {
    if (this.unansweredRecords >= MOST_UNANSWERED_RECORDS || this.unansweredCharacters >= MOST_UNANSWERED_CHARACTERS)
      await this.until(() => this.unansweredRecords < MOST_UNANSWERED_RECORDS && this.unansweredCharacters < MOST_UNANSWERED_CHARACTERS);
    if (this.fault) throw this.fault;
    this.unansweredRecords++;
    this.unansweredCharacters += charactersOf(record);
    this.backlog.push(record);
    this.soon();
  }

  /**
   * Says up to when the site is complete, or when it was live, once everything pushed before is answered.
   *
   * @returns when the server keeps it
   * @throws SiteStreamRefused
   */
  async state(state: SiteState): Promise<void> {
    let isKept = false;
    this.backlog.push({ state, kept: () => (isKept = true) });
    this.soon();
    await this.until(() => isKept);
  }

  /**
   * Waits until everything is answered.
   *
   * @throws SiteStreamRefused
   */
  async drained(): Promise<void> {
    await this.until(() => this.backlog.length === 0 && this.again.length === 0 && this.sent.size === 0);
  }

  /**
   * Waits until everything is answered, and ends the link.
   *
   * @throws SiteStreamRefused
   */
  async finish(): Promise<void> {
    await this.drained();
    this.stop();
  }

  /** Ends the link at once; how many records are without an answer. */
  stop(): number {
    this.isEnding = true;
    clearTimeout(this.retry);
    clearImmediate(this.pumping);
    this.link?.close('the sender ends');
    this.link = undefined;
    return this.unansweredRecords;
  }

  private async until(isMet: () => boolean): Promise<void> {
    if (this.fault) throw this.fault;
    if (isMet()) return;
    await new Promise<void>((resolve, reject) => this.waiters.push({ isMet, resolve, reject }));
  }

  private changed(): void {
    const { fault } = this;
    const [done, left] = [this.waiters.filter(({ isMet }) => fault ?? isMet()), this.waiters.filter(({ isMet }) => !fault && !isMet())];
    this.waiters = left;
    for (const { resolve, reject } of done) {
      if (fault) reject(fault);
      else resolve();
    }
  }

  private fail(why: string): void {
    this.fault ??= new SiteStreamRefused(why);
    this.stop();
    this.changed();
  }

  private async connect(): Promise<void> {
    const found = await openLink(this.options, { onCredit: () => this.soon(), onEnd: (end) => this.lost(end) });
    if (!('welcome' in found)) {
      this.failures++;
      // A server that was there before may be away, with something else in its place; one that never was is at another address.
      this.lost({ ...found, isForGood: found.isForGood || (found.isOther === true && !this.firstWelcome) });
      return;
    }
    if (this.isEnding) {
      found.close('the sender ends');
      return;
    }
    this.link = found;
    this.answersOnLink = 0;
    this.firstWelcome ??= found.welcome;
    this.options.onLink?.({ is: 'open', welcome: found.welcome });
    this.changed();
    this.soon();
  }

  private lost({ why, isForGood, retryAfterMs }: LinkEnd): void {
    this.link = undefined;
    if (this.isEnding) return;
    if (isForGood) {
      this.fail(why);
      return;
    }
    this.takeBack();
    if (this.fault) return;
    const delayMs = retryDelayMs(this.failures, retryAfterMs, Math.random(), this.options.retry ?? RETRY_BOUNDS);
    this.options.onLink?.({ is: 'lost', why, againInMs: delayMs });
    this.retry = setTimeout(() => void this.connect(), delayMs);
  }

  /** Everything that was on its way goes again, in its order; what the link closed on several times goes record by record. */
  private takeBack(): void {
    const back = [...this.sent];
    this.sent.clear();
    const [first] = back;
    if (first && 'records' in first && this.answersOnLink === 0) {
      first.closes++;
      const [record] = first.records;
      if (first.isAlone && first.closes >= MOST_CLOSES) {
        this.fail(`the link was lost ${MOST_CLOSES} times while the record ${JSON.stringify(record)} was on its way`);
        return;
      }
      if (!first.isAlone && first.closes >= CLOSES_UNTIL_ALONE)
        back.splice(0, 1, ...first.records.flatMap((one) => this.pieces([one], true)));
    }
    this.again = [...back, ...this.again];
  }

  /** Sends in the next turn, so that what is pushed in one goes together. */
  private soon(): void {
    this.pumping ??= setImmediate(() => {
      this.pumping = undefined;
      this.pump();
      this.changed(); // what cannot be sent is settled on the way
    });
  }

  private pump(): void {
    const { link } = this;
    while (link && !link.isEnding && Date.now() >= this.pausedUntilMs) {
      const piece = this.next(link);
      if (!piece) return;
      this.sent.add(piece);
      if ('state' in piece) void this.sendState(link, piece);
      else void this.sendRecords(link, piece);
    }
  }

  /** The next message that may go now. */
  private next(link: SiteLink): Piece | undefined {
    if (this.sent.size >= MOST_ON_THE_WAY || [...this.sent].some(goesAlone)) return undefined;
    if (this.again.length === 0) this.fill(link);
    const [first] = this.again;
    if (!first || (goesAlone(first) && this.sent.size > 0)) return undefined;
    if ('records' in first && !fits(first, link)) {
      if (!this.makeSmaller(first, link)) return undefined;
      return this.next(link);
    }
    this.again.shift();
    return first;
  }

  /** Halves what is too much for the credit, once nothing else is on its way that would bring more. */
  private makeSmaller(first: Batch, { credit }: SiteLink): boolean {
    if (this.sent.size > 0 || first.records.length < 2 || credit.records === 0) return false;
    this.again.splice(0, 1, ...this.halves(first.records, first.isAlone));
    return true;
  }

  /** Packs what waits, up to the next state. A small batch waits while two are on their way: their answers come soon, and it grows meanwhile. */
  private fill({ welcome, credit }: SiteLink): void {
    const [head] = this.backlog;
    if (!head) return;
    if (!isRecord(head)) {
      this.again.push(head);
      this.backlog.shift();
      return;
    }
    const most = Math.min(BATCH_RECORDS, welcome.limits.batchRecords, credit.records);
    const stateAt = this.backlog.findIndex((entry) => !isRecord(entry));
    const count = Math.min(most, stateAt < 0 ? this.backlog.length : stateAt);
    if (count === 0 || (count < most && this.sent.size >= 2)) return;
    this.again.push(...this.pieces(this.backlog.splice(0, count).filter(isRecord), false));
  }

  /** Records as messages: one, or several where one cannot hold them. */
  private pieces(records: readonly SiteRecord[], isAlone: boolean): Piece[] {
    const packed = packRecords(records, utf8);
    if (packed.ok) return [{ records, packed: packed.value, closes: 0, isAlone }];
    if (records.length > 1) return this.halves(records, isAlone);
    this.settle(records, { fate: 'unsendable', detail: `${packed.problem.where} ${packed.problem.text}` });
    return [];
  }

  private halves(records: readonly SiteRecord[], isAlone: boolean): Piece[] {
    const half = Math.ceil(records.length / 2);
    return [...this.pieces(records.slice(0, half), isAlone), ...this.pieces(records.slice(half), isAlone)];
  }

  private async sendState(link: SiteLink, piece: Said): Promise<void> {
    const answer = await link.ask('stream:state', piece.state, siteStateKept);
    if (!answer || !this.sent.delete(piece)) return; // the link is no more, and it goes again
    if (answer.ok) piece.kept();
    else if (answer.code === 'unusable') this.fail(answer.text);
    else this.sendAgain(link, piece, answer);
    this.changed();
    this.soon();
  }

  private async sendRecords(link: SiteLink, piece: Batch): Promise<void> {
    const { records, packed } = piece;
    const number = this.number++;
    link.credit = sumOf(link.credit, { records: -records.length, bytes: -packed.length });
    const answer = await link.ask('stream:batch', { number, packed }, siteFates);
    if (!answer || !this.sent.delete(piece)) return; // the link is no more, and it goes again
    this.answersOnLink++;
    if (answer.ok) this.answered(link, records, answer);
    else if (answer.code === 'unusable' && records.length > 1) this.again.unshift(...this.halves(records, piece.isAlone));
    else if (answer.code === 'unusable') this.settle(records, { fate: 'unsendable', detail: answer.text });
    else this.sendAgain(link, piece, answer);
    this.changed();
    this.soon();
  }

  private sendAgain(link: SiteLink, piece: Piece, { code, text, retryAfterMs = PAUSE_MS }: SiteRefusal): void {
    this.again.unshift(piece);
    if (code === 'refused' || code === 'protocol') this.fail(text);
    else if (code === 'busy' || code === 'unknown') this.pause(retryAfterMs);
    else link.close(text); // the two are at odds about what was said before: a new link begins anew
  }

  private pause(ms: number): void {
    this.pausedUntilMs = Date.now() + ms;
    setTimeout(() => this.soon(), ms);
  }

  private answered(link: SiteLink, records: readonly SiteRecord[], fates: SiteFates): void {
    this.failures = 0;
    link.credit = sumOf(link.credit, fates.credit);
    const left = new Set(records.keys());
    const take = (rows: Iterable<number>, fate: FinalFate): void => {
      for (const row of rows) {
        const record = records[row];
        if (record && left.delete(row)) this.settle([record], fate);
      }
    };
    take(rowsOf(fates.stored), { fate: 'stored' });
    take(rowsOf(fates.known), { fate: 'known' });
    for (const { row, reason, detail } of fates.setAside) take([row], { fate: 'set-aside', reason, detail });
    // What no list names is as unknown as what that list names.
    const unknown = [...left].flatMap((row) => records[row] ?? []);
    if (unknown.length === 0) return;
    this.again.unshift(...this.pieces(unknown, false));
    this.pause(PAUSE_MS);
  }

  private settle(records: readonly SiteRecord[], fate: FinalFate): void {
    for (const record of records) {
      this.unansweredRecords--;
      this.unansweredCharacters -= charactersOf(record);
      this.options.onFate?.(record, fate);
    }
  }
}

function* rowsOf(runs: Runs): Generator<number> {
  for (const [first, count] of runs) for (let row = first; row < first + count; row++) yield row;
}

function charactersOf({ series, sequence, kind, reading, sigmaNs, amplitude, extra }: SiteRecord): number {
  let characters = series.length + sequence.length + kind.length + reading.length + sigmaNs.length + amplitude.length;
  for (const value of Object.values(extra ?? {})) characters += value.length;
  return characters;
}
