import { type Socket } from 'socket.io';
import type * as z from 'zod';
import { firstProblem } from '#shared/contract/first-problem';
import { judge, policyOf } from '#shared/contract/policies';
import { unpackRecords } from '#shared/contract/record-batch';
import {
  SITE_LIMITS,
  SITE_PROTOCOL,
  SITE_REQUESTS,
  type SiteBatch,
  type SiteCredit,
  type SiteFates,
  type SiteHello,
  type SiteNewsName,
  type SiteRefusal,
  type SiteRefusalCode,
  type SiteRow,
  type SiteState,
  type SiteStateKept,
  type SiteWelcome,
} from '#shared/contract/site-socket';
import { type SiteRecord } from '#shared/contract/site-record';
import { isUseDue } from '../accounts/site-key-use';
import { type Ground } from '../ground';
import { utf8 } from '../site-client/utf8';
import { type CreditAccount, type CreditOffice } from './credit-office';
import { type SiteDesk, type SiteSender } from './site-desk';
import { scaleOfSite, type KeyReader, type SiteOfKey } from './site-of-key';

const HELLO_MS = 10_000; // a stream that has not said hello by then is ended
const MOST_FAULTS = 20;
const MOST_PAST_CREDIT = 2;
const MOST_ASKED_AT_ONCE = 8; // hellos and states whose answer is not there yet
const MOST_UNSENT = 64; // answers that the site does not read
const MOST_SHOWN_NAME = 60;
const RETRY_UNKNOWN_MS = 2_000;

/** What a stream stands on. */
export interface StreamGround extends Pick<Ground, 'db' | 'log' | 'nowMs' | 'noteKeyUse'> {
  readonly desk: SiteDesk;
  readonly office: CreditOffice;
  readonly readKey: KeyReader;
  readonly isEnding: () => boolean;
  readonly retryAfterMs: () => number;
}

type Answer = SiteWelcome | SiteFates | SiteStateKept | SiteRefusal;
type Acknowledge = (answer: Answer) => void;

const refusalOf = (code: SiteRefusalCode, text: string, more: Partial<SiteRefusal> = {}): SiteRefusal => ({
  ok: false,
  code,
  text,
  ...more,
});

/** One site's link: every message is judged, checked, answered or counted, and none of them can end the process. */
export class SiteStream {
  readonly siteId: number;
  /** The arrival of the oldest batch without an answer, in ms; Infinity for none. */
  get waitingSinceMs(): number {
    return this.batches.values().next().value ?? Infinity;
  }

  private readonly sender: SiteSender;
  private readonly account: CreditAccount;
  /** When each batch without an answer came, in their order. */
  private readonly batches = new Map<object, number>();
  private readonly doing = new Set<Promise<void>>();
  private readonly helloBy: NodeJS.Timeout;
  private hasSaidHello = false;
  private faults = 0;
  private pastCredit = 0;
  private asked = 0;
  private unsent = 0;
  private why: string | undefined;
  private connectionId: number | undefined;

  constructor(
    private readonly socket: Socket,
    private readonly holder: SiteOfKey & { readonly key: string },
    private readonly ground: StreamGround,
  ) {
    const { keyId, siteId, networkId } = holder;
    this.siteId = siteId;
    this.sender = { keyId, siteId, networkId };
    this.account = ground.office.open();
    this.helloBy = setTimeout(() => this.end('No hello came.', ground.retryAfterMs()), HELLO_MS);
    socket.onAny((event: unknown, ...args: unknown[]) => this.take(String(event).slice(0, MOST_SHOWN_NAME), args));
    socket.conn.on('drain', () => (this.unsent = 0));
    ground.log.info({ event: 'site-stream:begun', siteId, keyId }, 'a site has connected');
  }

  /** Tells of credit that there is to give. */
  giveCredit(): void {
    if (this.connectionId === undefined || !this.socket.connected) return;
    const granted = this.ground.office.grant(this.account);
    if (granted.records > 0 || granted.bytes > 0) this.tell('stream:credited', granted);
  }

  /** Ends the stream for now. */
  end(text: string, retryAfterMs: number): void {
    this.tellEnd(text, retryAfterMs);
    this.cut(text);
  }

  tellEnd(text: string, retryAfterMs: number): void {
    this.tell('stream:ended', { text, retryAfterMs });
  }

  /** When everything that came in so far is answered. */
  async settled(): Promise<void> {
    while (this.doing.size > 0) await Promise.all(this.doing);
  }

  /** The link is no more. */
  left(why: string): void {
    clearTimeout(this.helloBy);
    this.ground.office.close(this.account);
    const { siteId, keyId } = this.sender;
    const ended = this.why ?? why;
    this.ground.log.info({ event: 'site-stream:ended', siteId, keyId, why: ended, faults: this.faults }, 'a site is no longer connected');
    if (this.connectionId !== undefined) this.bye(this.connectionId, ended);
  }

  private bye(connectionId: number, why: string): void {
    this.ground.desk.bye(connectionId, why).catch((fault: unknown) => this.ground.log.error(fault, 'the end of a stream was not kept'));
  }

  private tell(name: SiteNewsName, news: unknown): void {
    this.socket.emit(name, news);
  }

  private cut(why: string): void {
    this.why ??= why;
    this.socket.disconnect(true);
  }

  /** Whether the key still holds; where it does not, the site is told and the stream ends. */
  isAllowed(): boolean {
    if (!this.socket.connected) return false;
    const found = this.ground.readKey(this.holder.key);
    if (typeof found !== 'string') return true;
    this.tell('stream:refused', { text: found });
    this.cut(found);
    return false;
  }

  private take(name: string, args: unknown[]): void {
    const last = args.at(-1);
    // A message whose answer nobody waits for is not done: the sender could not know what became of it.
    if (typeof last !== 'function') {
      this.fault();
      return;
    }
    const acknowledge = last as Acknowledge;
    const answer: Acknowledge = (given) => {
      if (!this.socket.connected) return;
      if (++this.unsent > MOST_UNSENT) this.cut('The site does not read its answers.');
      else acknowledge(given);
    };
    const policy = policyOf(name);
    if (!isRequest(name) || !policy || judge(policy, { kind: 'site-key' }) !== 'allowed') {
      answer(refusalOf('unusable', `There is no message ${JSON.stringify(name)}; there are ${Object.keys(SITE_REQUESTS).join(', ')}.`));
      this.fault();
      return;
    }
    if (args.length !== 2) {
      answer(refusalOf('unusable', `${name} came with ${args.length - 1} arguments; it takes one object, and a function for the answer.`));
      this.fault();
      return;
    }
    if (!this.isAllowed()) return;
    const doing = this.do(name, args[0]).then(answer, (fault: unknown) => {
      this.ground.log.error(fault, 'a message of a site could not be done');
      answer(refusalOf('unknown', 'The server could not do it: send it again.', { retryAfterMs: RETRY_UNKNOWN_MS }));
    });
    this.doing.add(doing);
    void doing.finally(() => this.doing.delete(doing));
  }

  /** A fault of the sender; too many of them end the stream. */
  private fault(): void {
    if (++this.faults >= MOST_FAULTS) this.end(`${MOST_FAULTS} messages were not as they must be.`, this.ground.retryAfterMs());
  }

  private async do(name: keyof typeof SITE_REQUESTS, given: unknown): Promise<Answer> {
    switch (name) {
      case 'stream:hello':
        return this.parsed(SITE_REQUESTS[name], given, (hello) => this.once(() => this.hello(hello)));
      case 'stream:batch':
        return this.parsed(SITE_REQUESTS[name], given, (batch) => this.afterHello(() => this.batch(batch)));
      case 'stream:state':
        return this.parsed(SITE_REQUESTS[name], given, (state) => this.afterHello(() => this.once(() => this.state(state))));
    }
  }

  private parsed<T>(schema: z.ZodType<T>, given: unknown, then: (value: T) => Promise<Answer> | Answer): Promise<Answer> | Answer {
    const { data, error, success } = schema.safeParse(given);
    if (success) return then(data);
    const { where, text } = firstProblem(error, given, 'message').problem;
    return this.unusable(where === '' ? text : `${where}: ${text}`);
  }

  private unusable(text: string): SiteRefusal {
    this.fault();
    return refusalOf('unusable', text);
  }

  private afterHello(then: () => Promise<Answer>): Promise<Answer> | Answer {
    if (this.hasSaidHello) return then();
    this.fault();
    return refusalOf('hello-first', 'The first message of a connection is stream:hello.');
  }

  private async once(then: () => Promise<Answer>): Promise<Answer> {
    if (this.asked >= MOST_ASKED_AT_ONCE) {
      this.fault();
      return refusalOf('busy', `${MOST_ASKED_AT_ONCE} messages wait for their answers: send the next when one has come.`);
    }
    this.asked++;
    try {
      return await then();
    } finally {
      this.asked--;
    }
  }

  private async hello({ protocol, software }: SiteHello): Promise<Answer> {
    if (protocol !== SITE_PROTOCOL)
      return refusalOf('protocol', `The protocol ${protocol} is not spoken here: this server speaks ${SITE_PROTOCOL}.`);
    if (this.hasSaidHello) return this.unusable('The hello of this connection was said already.');
    this.hasSaidHello = true;
    clearTimeout(this.helloBy);
    const { keyId, lastUsedAt } = this.holder;
    if (isUseDue(lastUsedAt, this.ground.nowMs())) this.ground.noteKeyUse(keyId);
    const { connectionId, series, more, completeTo } = await this.ground.desk.hello(this.sender, software);
    if (this.socket.connected) this.connectionId = connectionId;
    else this.bye(connectionId, 'the link was lost');
    return {
      ok: true,
      protocol: SITE_PROTOCOL,
      site: this.holder.site,
      network: this.holder.network,
      scale: scaleOfSite(this.ground.db, this.siteId),
      series: [...series],
      more,
      completeTo,
      limits: { batchRecords: SITE_LIMITS.batchRecords, batchBytes: SITE_LIMITS.batchBytes },
      credit: this.grant(),
    };
  }

  private async batch({ number, packed, rows }: SiteBatch): Promise<Answer> {
    if (this.ground.isEnding())
      return refusalOf('busy', 'The server ends: send it again to the next.', { retryAfterMs: this.ground.retryAfterMs() });
    const found = packed ? unpackRecords(packed, utf8) : undefined;
    if (found && !found.ok) return this.unusable(`${found.problem.where}: ${found.problem.text}`);
    const records = found ? found.value : (rows ?? []).map(recordOfRow);
    const bytes = packed ? packed.length : Buffer.byteLength(JSON.stringify(rows));
    if (bytes > SITE_LIMITS.batchBytes)
      return this.unusable(`The rows take ${bytes} bytes as JSON; a batch has at most ${SITE_LIMITS.batchBytes}.`);
    const cost: SiteCredit = { records: records.length, bytes };
    const { office } = this.ground;
    if (!office.spend(this.account, cost)) return this.beyondCredit(cost);
    const mark = {};
    this.batches.set(mark, this.ground.nowMs());
    try {
      const fates = await this.ground.desk.batch(this.sender, records);
      office.settle(this.account, cost);
      return { ok: true, number, ...fates, setAside: [...fates.setAside], credit: this.grant() };
    } catch (fault) {
      office.settle(this.account, cost);
      throw fault;
    } finally {
      this.batches.delete(mark);
    }
  }

  private grant(): SiteCredit {
    return this.ground.isEnding() || !this.socket.connected ? { records: 0, bytes: 0 } : this.ground.office.grant(this.account);
  }

  private beyondCredit({ records, bytes }: SiteCredit): SiteRefusal {
    const { left } = this.account;
    const text = `The batch has ${records} records and ${bytes} bytes; ${left.records} and ${left.bytes} are granted: wait for more.`;
    if (++this.pastCredit >= MOST_PAST_CREDIT) this.end(text, this.ground.retryAfterMs());
    return refusalOf('past-credit', text);
  }

  private async state(state: SiteState): Promise<Answer> {
    const kept = await this.ground.desk.state(this.sender, state);
    if (kept.ok) return { ok: true, completeTo: kept.value };
    const { code, where, text } = kept.problem;
    return code === 'unknown' ? refusalOf('unknown', text, { retryAfterMs: RETRY_UNKNOWN_MS }) : this.unusable(`${where} ${text}`);
  }
}

const isRequest = (name: string): name is keyof typeof SITE_REQUESTS => Object.hasOwn(SITE_REQUESTS, name);

/** The record that a row stands for; an empty text of a further column is absent. */
function recordOfRow(row: SiteRow): SiteRecord {
  const named = Object.entries(row.extra ?? {}).filter(([, value]) => value !== '');
  return {
    series: row.series ?? '',
    sequence: row.sequence,
    kind: row.kind ?? '',
    reading: row.reading,
    readingForm: row.readingForm ?? 'iso',
    sigmaNs: row.sigmaNs ?? '',
    amplitude: row.amplitude ?? '',
    ...(named.length > 0 && { extra: Object.fromEntries(named) }),
  };
}
