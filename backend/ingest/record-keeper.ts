import { type SiteRecord } from '#shared/contract/site-record';
import { KINDS } from '#shared/reconcile/record';
import { compareInstants, type Instant } from '#shared/time/instant';
import { createTaiWriter } from '#shared/time/format';
import { type Db } from '../db';
import { emptyMadeEvent, type EventMaker, type MadeEvent, type MeasuredTexts } from '../reconcile/event-maker';
import { type NetworkInForce, type SiteInForce } from '../reconcile/network-in-force';
import { EventStore } from './event-store';
import { type GroupNotes, type SetAsideReason } from './group-notes';
import { contentHash } from './hashes';
import { formFault, identityOf } from './record-form';
import { MOST_SERIES, type SeriesBook, SeriesBooks, UNREAD_SERIES } from './series-books';
import { dueMs, FUTURE_BOUND_S, latestAt } from './server-time';
import { SetAsideStore, type SetAsideRow } from './set-aside-store';
import { recordOf, textsOf, type TriggerRow, TriggerRows } from './trigger-rows';

/** What a network's records are looked at with. */
export interface NetworkAtWork {
  readonly network: NetworkInForce;
  readonly maker: EventMaker;
}

/** What became of a record, and if it is set aside, why. */
export type Verdict =
  { readonly fate: 'stored' | 'known' } | { readonly fate: 'set-aside'; readonly reason: SetAsideReason; readonly detail: string };

const STORED: Verdict = { fate: 'stored' };
const KNOWN: Verdict = { fate: 'known' };

/** A fault of a record; `readable` when it is kept as a trigger all the same, since only what is in force speaks against it. */
interface Fault {
  readonly reason: SetAsideReason;
  readonly detail: string;
  readonly isReadable: boolean;
  readonly retryAtMs: number | null;
}

/** The faults that are no fault of the record: what is in force, or the time, may come to hold it. */
const READABLE: ReadonlySet<SetAsideReason> = new Set(['before-clock-record', 'outside-run', 'outside-ephemeris']);

/**
 * Decides of each record what it is: an identity that stands, the same again, or set aside; inside one transaction, whose end is `write`.
 *
 * All of it depends on which records there are, not on their order: of one identity's contents that would each be accepted by themselves, one
 * alone stands, and two or more are set aside together.
 */
export class RecordKeeper {
  readonly setAsides: SetAsideStore;
  readonly triggers: TriggerRows;
  readonly events: EventStore;
  readonly books: SeriesBooks;
  private readonly made: MadeEvent = emptyMadeEvent();
  private latest: { readonly nowMs: number; readonly network: NetworkInForce; readonly instant: Instant } | undefined;

  constructor(
    db: Db,
    readonly notes: GroupNotes,
  ) {
    this.setAsides = new SetAsideStore(db, notes);
    this.triggers = new TriggerRows(db);
    this.events = new EventStore(db, notes);
    this.books = new SeriesBooks(db);
  }

  /** Takes in a record of a site's stream. */
  take(at: NetworkAtWork, site: SiteInForce, record: SiteRecord, nowMs: number): Verdict {
    const hash = contentHash(record);
    const fault = formFault(record) ?? this.faultOf(at, site, record, nowMs);
    const identity = fault ? identityOf(record) : this.made;
    const book = this.books.open(site.id, identity.series) ?? this.openUnread(site.id);
    book.received++;
    book.firstReceivedAtMs ??= nowMs;
    book.lastReceivedAtMs = nowMs;
    // Numbers that are not held have no content yet, so that a record in its order costs no look-up.
    const number = identity.sequence === null || book.series === UNREAD_SERIES ? undefined : BigInt(identity.sequence);
    const isFresh = number !== undefined && book.held.add(number, nowMs);
    const others = isFresh || number === undefined ? [] : this.triggers.variants(site.id, identity.series, identity.sequence ?? '');
    if (!isFresh && (others.some((other) => other.contentHash.equals(hash)) || this.setAsides.isKnown(site.id, hash))) {
      book.known++;
      return KNOWN;
    }
    if (book.series !== identity.series) {
      const detail = `the site has begun ${MOST_SERIES} series; a record of yet another one is not taken`;
      return this.setAside(at, site, { record, hash, book, sequence: identity.sequence }, { reason: 'series', detail });
    }
    if (fault && !('isReadable' in fault && fault.isReadable))
      return this.setAside(at, site, { record, hash, book, sequence: identity.sequence }, fault);
    const triggerId = this.triggers.add({
      siteId: site.id,
      series: this.made.series,
      sequence: this.made.sequence,
      variant: others.length,
      kind: KINDS[this.made.kind] ?? 'trigger',
      record,
      contentHash: hash,
      receivedAtMs: nowMs,
      mendedFromId: null,
    });
    const aside = { record, hash, book, sequence: this.made.sequence, triggerId };
    if (fault) return this.setAside(at, site, aside, fault);
    return this.admit(at, site, triggerId, { book, others, isNew: true })
      ? STORED
      : this.setAside(at, site, aside, conflictOf(site, this.made));
  }

  /** Sets a record aside that could not be written as anything else; counted, and known when it comes again. */
  takeUnreadable(at: NetworkAtWork, site: SiteInForce, record: SiteRecord, nowMs: number): Verdict {
    const book = this.openUnread(site.id);
    book.received++;
    book.firstReceivedAtMs ??= nowMs;
    book.lastReceivedAtMs = nowMs;
    const hash = contentHash(record);
    if (this.setAsides.isKnown(site.id, hash)) {
      book.known++;
      return KNOWN;
    }
    const detail = 'the database took the record in no other form; it is kept as it came';
    return this.setAside(at, site, { record, hash, book, sequence: null }, { reason: 'unreadable', detail });
  }

  /** What speaks against a record by what is in force and by the server's clock; the event is computed into `made`. */
  faultOf(at: NetworkAtWork, site: SiteInForce, texts: MeasuredTexts, nowMs: number): Fault | undefined {
    const reason = at.maker.make(site, texts, this.made);
    if (reason)
      return {
        reason,
        detail: at.maker.faultText(reason, site, texts, this.made),
        isReadable: READABLE.has(reason),
        retryAtMs: null,
      };
    if (compareInstants(this.made, this.latestAt(at.network, nowMs)) <= 0) return undefined;
    return {
      reason: 'future',
      detail: `the event is at ${createTaiWriter()(this.made)} TAI, more than ${FUTURE_BOUND_S} s after the server's clock; it is tried again when its time has come`,
      isReadable: true,
      retryAtMs: dueMs(this.made, at.network.tables.leapSeconds),
    };
  }

  /**
   * Lets a trigger stand whose event is in `made`, unless another content of its identity may stand too: then that one goes.
   *
   * @returns whether it stands; otherwise the caller sets it aside
   */
  admit(
    at: NetworkAtWork,
    site: SiteInForce,
    triggerId: number,
    { book, others, isNew }: { book: SeriesBook; others: readonly TriggerRow[]; isNew: boolean },
  ): boolean {
    let isAlone = true;
    for (const other of others) {
      if (other.id === triggerId) continue;
      const wasInConflict = this.setAsides.ofTrigger(other.id).some(({ reason }) => reason === 'conflict');
      if (!wasInConflict && other.stands === 0) continue;
      isAlone = false;
      // A person has let the other one stand: the new one waits for them.
      if (wasInConflict) continue;
      this.events.withdraw(at.network, other.id);
      this.bookOf(other).stored--;
      const { siteId, sequence, contentHash: hash } = other;
      const aside = { record: recordOf(other), hash, book: this.bookOf(other), sequence, triggerId: other.id };
      if (siteId === site.id) this.setAside(at, site, aside, conflictOf(site, other));
    }
    if (!isAlone) return false;
    this.events.put(at.network, { triggerId, siteId: site.id }, this.made, isNew);
    book.stored++;
    return true;
  }

  /** Looks again at a set-aside that was read as a trigger, by the program itself. Answers whether it is decided now. */
  retry(at: NetworkAtWork, row: SetAsideRow, nowMs: number): boolean {
    const site = at.network.siteById.get(row.siteId);
    if (!site || row.triggerId === null) return false;
    const trigger = this.triggers.find(row.triggerId);
    if (this.faultOf(at, site, textsOf(trigger), nowMs)) return false;
    const why = row.reason === 'future' ? 'its time has come' : 'what is in force holds it now';
    this.setAsides.decide(row, 'accepted', { personId: null, why, nowMs });
    this.letStand(at, site, trigger);
    return true;
  }

  /** A trigger that was set aside stands, or is in conflict; its event is in `made`. */
  letStand(at: NetworkAtWork, site: SiteInForce, trigger: TriggerRow): void {
    const book = this.bookOf(trigger);
    book.setAside--;
    const others = this.triggers.variants(trigger.siteId, trigger.series, trigger.sequence);
    if (this.admit(at, site, trigger.id, { book, others, isNew: false })) return;
    const aside = { record: recordOf(trigger), hash: trigger.contentHash, book, sequence: trigger.sequence, triggerId: trigger.id };
    this.setAside(at, site, aside, conflictOf(site, trigger));
  }

  /** Computes an event that stands anew; it goes, and is set aside, where what is in force holds it no longer. Answers whether anything changed. */
  recompute(at: NetworkAtWork, trigger: TriggerRow, nowMs: number): boolean {
    const site = at.network.siteById.get(trigger.siteId);
    if (!site) throw new Error(`site ${trigger.siteId} is of another network`);
    const fault = this.faultOf(at, site, textsOf(trigger), nowMs);
    if (!fault) return this.events.recompute(at.network, { triggerId: trigger.id, siteId: site.id }, this.made);
    this.events.withdraw(at.network, trigger.id);
    const book = this.bookOf(trigger);
    book.stored--;
    const aside = { record: recordOf(trigger), hash: trigger.contentHash, book, sequence: trigger.sequence, triggerId: trigger.id };
    this.setAside(at, site, aside, fault);
    return true;
  }

  /** The book in which a trigger is counted. */
  bookOf(trigger: TriggerRow): SeriesBook {
    return this.books.open(trigger.siteId, trigger.countedIn) ?? this.openUnread(trigger.siteId);
  }

  /** The event that was computed last. */
  get event(): MadeEvent {
    return this.made;
  }

  write(): void {
    this.books.write();
    this.events.write();
  }

  /** After a transaction that failed. */
  forget(): void {
    this.books.forget();
    this.events.forget();
    this.notes.forget();
  }

  private setAside(
    at: NetworkAtWork,
    site: SiteInForce,
    aside: { record: SiteRecord; hash: Buffer; book: SeriesBook; sequence: string | null; triggerId?: number },
    fault: { reason: SetAsideReason; detail: string; retryAtMs?: number | null },
  ): Verdict {
    const { reason, detail, retryAtMs = null } = fault;
    const { record, hash, book, sequence, triggerId = null } = aside;
    const { id: networkId } = at.network;
    const row = {
      networkId,
      siteId: site.id,
      series: book.series,
      sequence,
      triggerId,
      reason,
      detail,
      record,
      contentHash: hash,
      retryAtMs,
    };
    this.setAsides.put(row, book.lastReceivedAtMs ?? 0);
    book.setAside++;
    return { fate: 'set-aside', reason, detail };
  }

  private openUnread(siteId: number): SeriesBook {
    const book = this.books.open(siteId, UNREAD_SERIES);
    if (!book) throw new Error(`site ${siteId} has no book for records that cannot be read`);
    return book;
  }

  private latestAt(network: NetworkInForce, nowMs: number): Instant {
    if (this.latest?.nowMs !== nowMs || this.latest.network !== network)
      this.latest = { nowMs, network, instant: latestAt(nowMs, network.tables.leapSeconds) };
    return this.latest.instant;
  }
}

/** The fault of contents of one identity that are more than one: in the same words for each, whichever came first. */
function conflictOf(
  { code }: SiteInForce,
  { series, sequence }: { series: string; sequence: string },
): { reason: 'conflict'; detail: string } {
  const name = series === '' ? `${code}:${sequence}` : `${code}:${series}:${sequence}`;
  return { reason: 'conflict', detail: `more than one content came under ${name}; a person decides which of them stands, if any` };
}
