import { type Outcome, problemOf, valueOf } from '#shared/outcome';
import { KINDS } from '#shared/reconcile/record';
import { type SiteRecord } from '#shared/contract/site-record';
import { type Actor, change } from '../audit/change';
import { type Ground } from '../ground';
import { type SiteInForce } from '../reconcile/network-in-force';
import { writeBooks } from './group-loop';
import { contentHash } from './hashes';
import { type IngestParts } from './ingest';
import { formFault, parseVerbatim } from './record-form';
import { type NetworkAtWork } from './record-keeper';
import { type SetAsideRow } from './set-aside-store';
import { type Stored } from './stored';
import { textsOf } from './trigger-rows';

/** What a decision on a set-aside stands on. */
export interface DecisionSources {
  readonly ground: Pick<Ground, 'db' | 'log' | 'nowMs' | 'auditHead'>;
  readonly parts: IngestParts;
  readonly actor: Actor;
}

/** Which set-aside is decided, as whoever decides has seen it, and why. */
export interface Deciding {
  readonly setAsideId: number;
  /** The version that was seen. */
  readonly version: number;
  readonly why: string;
}

/** A decision that cannot be taken; undoes its transaction. */
class Refused extends Error {
  constructor(
    readonly code: string,
    readonly where: string,
    readonly text: string,
  ) {
    super(text);
  }
}

interface Work {
  readonly row: SetAsideRow;
  readonly at: NetworkAtWork;
  readonly site: SiteInForce;
  readonly nowMs: number;
  readonly decide: (row: SetAsideRow, state: 'accepted' | 'dismissed') => void;
}

/** Takes a decision in one audited transaction with its books, and tells what came of it after the commit. */
function inOneDecision({ ground, parts, actor }: DecisionSources, deciding: Deciding, work: (at: Work) => void): Outcome<undefined> {
  const { keeper, inForce } = parts;
  let told: readonly Stored[] = [];
  try {
    change(ground, actor, (tx, note) => {
      const nowMs = ground.nowMs();
      const decide: Work['decide'] = (row, state) => {
        keeper.setAsides.decide(row, state, { personId: actor.kind === 'person' ? actor.id : null, why: deciding.why, nowMs });
        const details = { reason: row.reason, siteId: row.siteId, whyGiven: deciding.why.trim() !== '' }; // its words stand in the row alone
        note({ action: `set-aside:${state}`, subjectKind: 'set-aside', subjectId: row.id, networkId: row.networkId, details });
      };
      told = writeBooks(parts, tx, nowMs, () => {
        const row = openRow(keeper.setAsides.find(deciding.setAsideId), deciding);
        work({ row, ...inForce.site(row.siteId), nowMs, decide });
      }).stored;
    });
  } catch (fault) {
    keeper.forget();
    if (fault instanceof Refused) return problemOf(fault.code, fault.where, fault.text);
    throw fault;
  }
  for (const stored of told) parts.tell(stored);
  return valueOf(undefined);
}

function openRow(row: SetAsideRow | undefined, { setAsideId, version }: Deciding): SetAsideRow {
  if (!row) throw new Refused('absent', 'setAsideId', `is ${setAsideId}; there is no such set-aside`);
  if (row.version !== version) throw new Refused('stale', 'version', `is ${version}; the set-aside is at version ${row.version} now`);
  if (row.state !== 'open') throw new Refused('decided', 'state', `is ${row.state}; only what is open is decided`);
  return row;
}

/**
 * Lets a record stand that was set aside: as it came, or as a person mended it. Of a conflict this content stands, and all others of its identity
 * are dismissed, a former choice too.
 *
 * @param mended the record as it should have been; undefined for as it came
 * @returns nothing; or the problem `absent`, `stale`, `decided`, `identity` (another content stands under the identity), or the reason for
 *   which the record would be set aside again
 */
export function acceptSetAside(sources: DecisionSources, deciding: Deciding, mended?: SiteRecord): Outcome<undefined> {
  return inOneDecision(sources, deciding, (work) => {
    if (mended) acceptMended(sources.parts, work, mended);
    else if (work.row.reason === 'conflict') chooseVariant(sources.parts, work);
    else acceptAsItCame(sources.parts, work);
  });
}

/** Leaves a record set aside for good; what it says stays as it came. Of a conflict, one content alone: none stands once all are dismissed. */
export function dismissSetAside(sources: DecisionSources, deciding: Deciding): Outcome<undefined> {
  if (deciding.why.trim() === '') return problemOf('why', 'why', 'is empty; it must say why the record is dismissed');
  return inOneDecision(sources, deciding, ({ row, decide }) => decide(row, 'dismissed'));
}

/** Dismisses every content of a conflict that is still open: none of them stands. */
export function dismissConflict(sources: DecisionSources, deciding: Deciding): Outcome<undefined> {
  if (deciding.why.trim() === '') return problemOf('why', 'why', 'is empty; it must say why none of them stands');
  return inOneDecision(sources, deciding, ({ row, decide }) => {
    if (row.reason !== 'conflict') throw new Refused('reason', 'reason', `is ${row.reason}; only a conflict is decided as a whole`);
    for (const { conflict } of conflictsOf(sources.parts, row)) if (conflict.state === 'open') decide(conflict, 'dismissed');
  });
}

/** The conflict rows of all contents of an identity. */
function conflictsOf({ keeper }: IngestParts, row: SetAsideRow) {
  const { siteId, series, sequence } = keeper.triggers.find(row.triggerId ?? 0);
  return keeper.triggers.variants(siteId, series, sequence).flatMap((trigger) => {
    const conflict = keeper.setAsides.ofTrigger(trigger.id).find(({ reason }) => reason === 'conflict');
    return conflict ? [{ trigger, conflict }] : [];
  });
}

function refuseFault(fault: { readonly reason: string; readonly detail: string } | undefined): void {
  if (fault) throw new Refused(fault.reason, 'record', fault.detail);
}

function chooseVariant(parts: IngestParts, { row, at, site, nowMs, decide }: Work): void {
  const { keeper } = parts;
  for (const { trigger, conflict } of conflictsOf(parts, row)) {
    if (conflict.id === row.id) continue;
    if (trigger.stands === 1) {
      keeper.events.withdraw(at.network, trigger.id);
      keeper.bookOf(trigger).stored--;
      keeper.bookOf(trigger).setAside++;
    }
    if (conflict.state !== 'dismissed') decide(conflict, 'dismissed');
  }
  const trigger = keeper.triggers.find(row.triggerId ?? 0);
  refuseFault(keeper.faultOf(at, site, textsOf(trigger), nowMs));
  const book = keeper.bookOf(trigger);
  book.setAside--;
  book.stored++;
  decide(row, 'accepted');
  keeper.events.put(at.network, { triggerId: trigger.id, siteId: site.id }, keeper.event, false);
}

function acceptAsItCame(parts: IngestParts, work: Work): void {
  const { keeper } = parts;
  const { row, at, site, nowMs, decide } = work;
  if (row.triggerId === null) {
    const record = parseVerbatim(row.verbatim);
    if (!record) throw new Refused('unreadable', 'record', 'was kept in part or in another form; a mended record is needed');
    acceptMended(parts, work, record);
    return;
  }
  const trigger = keeper.triggers.find(row.triggerId);
  refuseFault(keeper.faultOf(at, site, textsOf(trigger), nowMs));
  decide(row, 'accepted');
  keeper.letStand(at, site, trigger);
}

function acceptMended({ keeper }: IngestParts, { row, at, site, nowMs, decide }: Work, mended: SiteRecord): void {
  refuseFault(formFault(mended) ?? keeper.faultOf(at, site, mended, nowMs));
  const { series, sequence, kind } = keeper.event;
  const others = keeper.triggers.variants(site.id, series, sequence);
  const rival = others.find(({ id, stands }) => stands === 1 || keeper.setAsides.ofTrigger(id).some(isOpenConflict));
  if (rival)
    throw new Refused('identity', 'record.sequence', `is ${sequence}; another content has that identity, which is to be decided first`);
  const held = keeper.books.open(site.id, series);
  if (!held) throw new Refused('series', 'record.series', `is ${series}; the site has begun too many series`);
  held.held.add(BigInt(sequence), nowMs);
  const triggerId = keeper.triggers.add({
    siteId: site.id,
    series,
    sequence,
    variant: others.length,
    kind: KINDS[kind] ?? 'trigger',
    record: mended,
    contentHash: contentHash(mended),
    receivedAtMs: nowMs,
    mendedFromId: row.id,
  });
  const book = keeper.bookOf(keeper.triggers.find(triggerId));
  book.setAside--;
  book.stored++;
  decide(row, 'accepted');
  keeper.events.put(at.network, { triggerId, siteId: site.id }, keeper.event, true);
}

const isOpenConflict = ({ reason, state }: SetAsideRow): boolean => reason === 'conflict' && state === 'open';
