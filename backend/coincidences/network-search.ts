import { addPicoseconds, compareInstants, type Instant } from '#shared/time/instant';
import { type Db } from '../db';
import { type Stored } from '../ingest/stored';
import { nextChange, noteChange } from '../live/note-change';
import { type StoredEvent } from '../reconcile/stored-event';
import { commit } from '../writer/commit';
import { activeRules } from './active-rule';
import { type CoincidenceNote, notedRows } from './change-note';
import { CoincidenceRows } from './coincidence-rows';
import { GapWatch } from './gap-watch';
import { LogRows } from './log-rows';
import { type LogSearch, LogSearches } from './log-search';
import { ReachHistory } from './reach-history';
import { RuleSearch, type Wanted } from './rule-search';
import { EVER, movedBy, NEVER, searchSetup } from './search-setup';
import { setHash, setNumbers } from './set-numbers';
import { type Place, type StoredLog } from './stored-log';
import { type FoundCrowd, type Stretch, StretchSearch } from './stretch-search';

/** Events of the stored log that are searched at a time. */
const STEP_EVENTS = 1_000;

/** Rows that become final, or former with their rule, in one transaction. */
const MOST_ROWS = 2_000;

/** After so many changes without a finding it is noted all the same up to where everything has been searched, so that a restart searches little. */
const MARK_EVERY = 256;

/** What the search of a network stands on. */
export interface NetworkGround {
  readonly db: Db;
  readonly nowMs: () => number;
  readonly networkId: number;
}

const justBefore = (instant: Instant): Instant => addPicoseconds(instant, -1);

/** What a transaction did, for its note. */
class Outcome {
  readonly appeared: number[] = [];
  readonly ended: number[] = [];
  readonly final: number[] = [];
  crowded = 0;

  isEmpty(): boolean {
    return this.appeared.length + this.ended.length + this.final.length + this.crowded === 0;
  }

  note(searchedTo: number | undefined): CoincidenceNote {
    const coincidences = { appeared: notedRows(this.appeared), ended: notedRows(this.ended), final: notedRows(this.final) };
    return { coincidences, crowded: this.crowded, ...(searchedTo !== undefined && { searchedTo }) };
  }
}

/**
 * Keeps the coincidences of one network as the batch finder would find them over its stored events, whatever the order in which those came.
 *
 * Each commit of events is followed by one transaction that holds everything that came of it. Lists are in force stretch by stretch: while the
 * stored log is searched by a new version of a rule, from its latest event back, the new version's sets stand where it has come to, and the
 * former version's before. A search that is stopped leaves both as they are.
 */
export class NetworkSearch {
  private readonly rows: CoincidenceRows;
  private readonly logRows: LogRows;
  private readonly jobs: LogSearches;
  private readonly reaches = new ReachHistory();
  private readonly gaps: GapWatch;
  private stretches: StretchSearch;
  private rules: readonly RuleSearch[] = [];
  private searches: LogSearch[] = [];
  /** The last instant at which no event is still to come. */
  private complete: Instant | undefined;
  private searchedTo = 0;
  private hasMoreFinal = false;
  private hasRetired = true;

  /** Brings the network's coincidences up to what is stored. */
  constructor(
    private readonly ground: NetworkGround,
    private log: StoredLog,
    completeUpTo: Instant | undefined,
  ) {
    const { db, networkId } = ground;
    this.rows = new CoincidenceRows(db);
    this.logRows = new LogRows(db, networkId);
    this.jobs = new LogSearches(db, ground.nowMs);
    this.gaps = new GapWatch(db, networkId);
    this.stretches = new StretchSearch(log, this.reaches);
    this.complete = completeUpTo && justBefore(completeUpTo);
    this.reaches.placeNs = this.logRows.mostPlaceNs();
    this.gaps.refresh();
    const missed = this.readPlaces();
    this.catchUp(missed, this.makeRules());
  }

  /** Takes in what a commit did; returns after the transaction that holds what came of it. */
  take(stored: Stored): void {
    if (stored.completeUpTo) this.complete = justBefore(stored.completeUpTo);
    for (const { taiS, sigmaNs } of stored.arrived) this.reaches.add(taiS, sigmaNs);
    if (stored.arrived.length + stored.withdrawn.length > 0) this.gaps.refresh();
    const wanted = this.rules.map((rule) => rule.take(stored, this.complete));
    this.write((outcome, change) => {
      this.rules.forEach((rule, at) => {
        const found = wanted[at];
        if (found) this.putInForce(rule, found, outcome, change);
      });
      this.finishSets(outcome);
    }, stored.changeNumber);
  }

  /** A rule was added, changed, or taken out of use. */
  rulesChanged(): void {
    this.makeRules();
    this.hasRetired = true;
  }

  /**
   * What the network is reconciled by has changed: rows of sites may have moved, bounds of windows be others. Events that are computed anew by it
   * are told as those of a commit.
   */
  renew(log: StoredLog): void {
    this.log = log;
    this.stretches = new StretchSearch(log, this.reaches);
    this.reaches.placeNs = this.logRows.mostPlaceNs();
    this.rules = [];
    this.makeRules();
  }

  /** Searches the whole stored log anew by all rules, for what no event tells: a frame of a window that was redefined. */
  searchLog(): void {
    this.searches = this.rules.map(({ setup }) => this.begin(setup.active));
  }

  /** Does a bounded piece of what is left to do; false when nothing is. */
  step(): boolean {
    const [search] = this.searches;
    if (search) this.stepBack(search);
    else if (this.hasMoreFinal) this.write((outcome) => this.finishSets(outcome));
    else if (this.hasRetired) this.retire();
    return this.searches.length > 0 || this.hasMoreFinal || this.hasRetired;
  }

  /** Reads where all events are, for their reaches, and which of them came after the last note of what has been searched. */
  private readPlaces(): readonly Place[] {
    this.searchedTo = this.logRows.searchedTo();
    const missed: Place[] = [];
    for (const { taiS, ps, sigmaNs, change } of this.logRows.places()) {
      this.reaches.add(taiS, sigmaNs);
      if (change > this.searchedTo) missed.push({ taiS, ps, sigmaNs });
    }
    for (const place of this.logRows.endedSince(this.searchedTo)) missed.push(place);
    return missed;
  }

  /**
   * Makes the searches of the rules in force; answers those whose versions had searched the log or a part of it. Where none of it was, the search
   * still comes to all that is stored, in steps: a start does not wait for that.
   */
  private makeRules(): readonly RuleSearch[] {
    const { db, networkId } = this.ground;
    const known: RuleSearch[] = [];
    const searches: LogSearch[] = [];
    this.rules = activeRules(db, networkId).map((active) => {
      const setup = searchSetup(active, this.log.ground);
      const kept = this.rules.find((rule) => rule.setup.active.versionId === active.versionId);
      const rule = kept ?? new RuleSearch(setup, this.sourcesFor(active.rule.code), this.complete);
      const search = this.jobs.of(networkId, active.versionId);
      if (search === 'done' || search?.searchedFrom) known.push(rule);
      if (search !== 'done') searches.push(search ?? this.begin(active));
      return rule;
    });
    this.searches = searches;
    return known;
  }

  private begin(active: { readonly ruleId: number; readonly versionId: number }): LogSearch {
    return commit(this.ground.db, () => this.jobs.begin(this.ground.networkId, active, this.logRows.events()));
  }

  private sourcesFor(ruleCode: string): ConstructorParameters<typeof RuleSearch>[1] {
    const { log } = this;
    return {
      stretches: this.stretches,
      reaches: this.reaches,
      formerPlace: (triggerId) => this.logRows.formerPlace(triggerId),
      instantFromLast: (back) => this.logRows.instantFromLast(back),
      nameOf: (events) => setHash(log.ground, ruleCode, events),
    };
  }

  /** Searches around what was stored and not searched when the process ended; one transaction for each piece. */
  private catchUp(missed: readonly Place[], known: readonly RuleSearch[]): void {
    const searchedTo = nextChange(this.ground.db, this.ground.networkId) - 1;
    for (const rule of known) {
      if (missed.length > 0)
        this.write((outcome) => {
          outcome.crowded += this.rows.clearGoneCrowds(rule.setup.active.versionId);
        });
      const places = missed.flatMap((place) => [place, { ...movedBy(place, rule.setup.active.deadTimeNs), sigmaNs: place.sigmaNs }]);
      for (const stretch of rule.stretchesAround(places))
        for (const piece of this.pieces(stretch)) this.write((outcome, change) => this.searchPiece(rule, piece, outcome, change));
    }
    if (missed.length > 0 || this.searchedTo === 0) this.write((outcome) => this.finishSets(outcome), searchedTo, 'note it');
  }

  /** Pieces of a stretch with a bounded number of events each, the latest first. */
  private *pieces({ from, to }: Stretch): Generator<Stretch> {
    let end = to;
    while (compareInstants(from, end) <= 0) {
      const begin = this.logRows.instantBefore(end, STEP_EVENTS - 1);
      if (!begin || compareInstants(begin, from) <= 0) {
        yield { from, to: end };
        return;
      }
      yield { from: begin, to: end };
      end = justBefore(begin);
    }
  }

  /** Searches a piece of the log and puts what begins there in force. */
  private searchPiece(rule: RuleSearch, piece: Stretch, outcome: Outcome, change: number): void {
    this.putInForce(rule, { sets: new Map(), crowds: new Map(), stretches: [piece] }, outcome, change);
  }

  /** The next step of a search of the whole log. */
  private stepBack(search: LogSearch): void {
    const { networkId } = this.ground;
    const rule = this.rules.find(({ setup }) => setup.active.versionId === search.versionId);
    if (!rule || this.jobs.isCancelled(networkId, search)) {
      this.write(() => this.jobs.end(search, 'cancelled'));
      this.searches.shift();
      return;
    }
    const to = search.searchedFrom ? justBefore(search.searchedFrom) : NEVER;
    const begin = this.logRows.instantBefore(to, STEP_EVENTS - 1);
    const { versionId, ruleId } = rule.setup.active;
    this.write((outcome, change) => {
      this.searchPiece(rule, { from: begin ?? EVER, to }, outcome, change);
      for (const former of this.rows.otherVersions(ruleId, versionId)) {
        for (const { id } of this.rows.within(former, { from: begin ?? EVER, to })) this.end(id, outcome, change);
        if (!begin) this.rows.clearCrowds(former);
      }
      if (begin) this.searches[0] = this.jobs.stepped(search, begin, STEP_EVENTS);
      else this.jobs.end(search, 'done');
      this.finishSets(outcome);
    });
    if (!begin) this.searches.shift();
  }

  /** Ends the sets of a version that is no longer in use. */
  private retire(): void {
    const active = new Set(this.rules.map(({ setup }) => setup.active.versionId));
    for (const versionId of this.rows.versionsOf(this.ground.networkId)) {
      if (active.has(versionId)) continue;
      const ids = this.rows.latest(versionId, MOST_ROWS);
      if (ids.length === 0) continue;
      this.write((outcome, change) => {
        for (const id of ids) this.end(id, outcome, change);
        this.rows.clearCrowds(versionId);
      });
      return;
    }
    this.hasRetired = false;
  }

  /** Puts in force what a search found, and takes out of force what it did not find again. */
  private putInForce(rule: RuleSearch, wanted: Wanted, outcome: Outcome, change: number): void {
    const { setup } = rule;
    const { networkId } = this.ground;
    const { versionId } = setup.active;
    const sets = new Map(wanted.sets);
    const crowds = new Map(wanted.crowds);
    for (const stretch of wanted.stretches) for (const piece of this.pieces(stretch)) this.overrule(rule, piece, sets, crowds);
    const finalTo = rule.finalTo(this.complete);
    const ended: number[] = [];
    const appeared = new Map<number, readonly StoredEvent[]>();
    for (const [name, events] of sets) {
      const current = this.rows.byName(networkId, name, versionId);
      const numbers = events && setNumbers(setup, events, name);
      if (current && numbers?.rowHash.equals(current.rowHash)) continue;
      if (current) ended.push(this.end(current.id, outcome, change));
      if (!numbers) continue;
      const isFinal = finalTo !== undefined && compareInstants(numbers.first, finalTo) <= 0;
      const touchesGap = this.gaps.touches(setup, numbers.first, numbers.spanNs);
      const id = this.rows.insert(numbers, { networkId, versionId, isFinal, touchesGap, change });
      outcome.appeared.push(id);
      appeared.set(id, numbers.events);
    }
    this.noteGrowths(ended, appeared);
    for (const [triggerId, crowd] of crowds) if (this.rows.setCrowd(versionId, triggerId, crowd, change)) outcome.crowded++;
  }

  /** What the stored log says of a piece of time stands above what was found otherwise. */
  private overrule(
    { setup }: RuleSearch,
    piece: Stretch,
    sets: Map<string, readonly StoredEvent[] | undefined>,
    crowds: Map<number, FoundCrowd | undefined>,
  ): void {
    let left: Stretch | undefined = piece;
    while (left) {
      const { searched, triggers, sets: found, crowds: foundCrowds } = this.stretches.run(setup, left);
      const isWithin = (event: Instant): boolean => compareInstants(searched.from, event) <= 0 && compareInstants(event, searched.to) <= 0;
      for (const { setHash: name } of this.rows.within(setup.active.versionId, searched)) sets.set(name, undefined);
      for (const [name, events] of sets) if (events?.[0] && isWithin(events[0])) sets.set(name, undefined);
      for (const events of found) sets.set(setHash(setup.ground, setup.active.rule.code, events), events);
      for (const triggerId of triggers) crowds.set(triggerId, foundCrowds.get(triggerId));
      left = compareInstants(searched.from, left.from) > 0 ? { from: left.from, to: justBefore(searched.from) } : undefined;
    }
  }

  private end(id: number, outcome: Outcome, change: number): number {
    this.rows.end(id, change);
    outcome.ended.push(id);
    return id;
  }

  /** A set that ended since another holds all its events and more grew into that one. */
  private noteGrowths(ended: readonly number[], appeared: ReadonlyMap<number, readonly StoredEvent[]>): void {
    if (ended.length === 0 || appeared.size === 0) return;
    const byTrigger = new Map<number, number[]>();
    for (const [id, events] of appeared) {
      for (const { triggerId } of events) {
        const ids = byTrigger.get(triggerId);
        if (ids) ids.push(id);
        else byTrigger.set(triggerId, [id]);
      }
    }
    for (const formerId of ended) {
      const triggers = this.rows.triggersOf(formerId);
      const [first = -1] = triggers;
      for (const id of byTrigger.get(first) ?? []) {
        const held = appeared.get(id) ?? [];
        if (held.length > triggers.length && triggers.every((trigger) => held.some(({ triggerId }) => triggerId === trigger)))
          this.rows.grew(id, formerId);
      }
    }
  }

  /** Makes sets final that completeness has passed. */
  private finishSets(outcome: Outcome): void {
    let room = MOST_ROWS;
    for (const rule of this.rules) {
      const to = rule.finalTo(this.complete);
      if (!to || room === 0) continue;
      const ids = this.rows.finishTo(this.ground.networkId, rule.setup.active.versionId, to, room);
      room -= ids.length;
      for (const id of ids) outcome.final.push(id);
    }
    this.hasMoreFinal = room === 0;
  }

  /**
   * One transaction with its note.
   *
   * @param searchedTo the change up to which everything has been searched once this is committed; undefined where that does not move
   */
  private write(work: (outcome: Outcome, change: number) => void, searchedTo = 0, isNoted?: 'note it'): void {
    const { db, networkId, nowMs } = this.ground;
    const mark = searchedTo > this.searchedTo ? searchedTo : undefined;
    const outcome = new Outcome();
    const isMarked = commit(db, (tx) => {
      const change = nextChange(db, networkId);
      work(outcome, change);
      const isDue = isNoted !== undefined || (mark !== undefined && mark - this.searchedTo >= MARK_EVERY);
      if (outcome.isEmpty() && !isDue) return false;
      noteChange(tx, networkId, 'records', outcome.note(mark), nowMs());
      return true;
    });
    if (isMarked && mark !== undefined) this.searchedTo = mark;
  }
}
