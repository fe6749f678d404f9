import { computed, DestroyRef, inject, Injectable, signal } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { merge } from 'rxjs';
import { COINCIDENCE_ROUTES } from '#shared/contract/coincidence-routes';
import { type CoincidenceBrief, type CoincidenceInFull } from '#shared/contract/coincidence';
import { EVENT_ROUTES, type EventInFull } from '#shared/contract/event-routes';
import { type Frame, FRAME_ROUTES } from '#shared/contract/frame-routes';
import { type NetworkChanges } from '#shared/contract/live-changes';
import { PAIR_ROUTES, type PairsOfSet, USUAL_SIGMAS } from '#shared/contract/pair-routes';
import { allOf } from '../api/all-of';
import { ApiClient } from '../api/api-client';
import { ApiProblem, sentenceOf } from '../api/api-problem';
import { LiveStore } from '../live/live-store';
import { NetworkStore } from '../networks/network-store';
import { SessionStore } from '../session/session-store';
import { type ChangedFigure, changedFigures } from './pair-changes';
import { type PairSeen, pairSeen } from './pair-seen';

/** Which pair is asked for: two events, the coincidence that it was opened from, and how many standard errors make a decision. */
export interface PairAsked {
  readonly eventA: number;
  readonly eventB: number;
  readonly setId: number | undefined;
  readonly sigmas: number | undefined;
}

/** All that a pair's page rests on, as the server answered it. */
export interface PairAnswers {
  readonly asked: PairAsked;
  readonly set: PairsOfSet;
  readonly seen: PairSeen;
  /** The earlier event, and the later. */
  readonly events: readonly [EventInFull, EventInFull];
  readonly frames: readonly Frame[];
  /** The coincidences of which both are part; undefined for who may not see any. */
  readonly sets: readonly CoincidenceBrief[] | undefined;
  /** The coincidence that it was opened from, for the pairs before and behind. */
  readonly from: CoincidenceInFull | undefined;
}

/** What a page knows of its pair. */
export type PairState =
  | { readonly kind: 'loading' }
  | { readonly kind: 'same' }
  | { readonly kind: 'absent'; readonly missing: readonly number[] }
  | { readonly kind: 'two-networks'; readonly names: readonly string[] }
  | { readonly kind: 'fallen'; readonly names: readonly string[] }
  | { readonly kind: 'failed'; readonly text: string; readonly id: string | undefined }
  | { readonly kind: 'loaded'; readonly answers: PairAnswers };

const PAGE = 200;
const MOST_SET_PAGES = 5;
const ABSENT = 404;
/** After these any number may be another. */
const TURNS_ALL: ReadonlySet<string> = new Set(['setup', 'rule', 'reprocessed']);

/** One pair of events with all that is asked about it, kept as the network changes. */
@Injectable()
export class PairStore {
  private readonly api = inject(ApiClient);
  private readonly live = inject(LiveStore);
  private readonly networks = inject(NetworkStore);
  private readonly session = inject(SessionStore);
  private readonly now = signal<PairState>({ kind: 'loading' });
  private readonly changedNow = signal<readonly ChangedFigure[]>([]);
  private asked: PairAsked | undefined;
  private turn = 0;

  readonly state = this.now.asReadonly();
  /** Figures that the network's changes made others while the page was open, against those before. */
  readonly changed = this.changedNow.asReadonly();
  readonly answers = computed(() => {
    const state = this.now();
    return state.kind === 'loaded' ? state.answers : undefined;
  });

  constructor() {
    merge(this.live.changes, this.live.anew)
      .pipe(takeUntilDestroyed(inject(DestroyRef)))
      .subscribe((changes) => {
        if (this.asked && this.touches(changes ?? undefined)) void this.read(this.asked);
      });
  }

  /** Shows a pair; the page of another one begins anew. */
  show(asked: PairAsked): void {
    this.asked = asked;
    this.now.set({ kind: 'loading' });
    this.changedNow.set([]);
    void this.read(asked);
  }

  again(): void {
    if (this.asked) this.show(this.asked);
  }

  seenChanges(): void {
    this.changedNow.set([]);
  }

  private async read(asked: PairAsked): Promise<void> {
    const turn = ++this.turn;
    const state = await this.ask(asked).catch((fault: unknown): PairState => failedBy(fault));
    if (turn !== this.turn) return;
    const before = this.answers();
    // What is on screen stays there when it cannot be read again: the connection mark says that the server is not reached.
    if (before && state.kind === 'failed') return;
    if (before && state.kind === 'loaded') {
      const changed = changedFigures(before.seen, state.answers.seen);
      if (changed.length > 0) this.changedNow.set(changed);
    }
    this.now.set(state);
  }

  private async ask(asked: PairAsked): Promise<PairState> {
    const { eventA, eventB, setId } = asked;
    if (eventA === eventB) return { kind: 'same' };
    const ids = [eventA, eventB];
    const found = await Promise.all(ids.map((eventId) => orAbsent(this.api.call(EVENT_ROUTES.readEvent, { params: { eventId } }))));
    const [one, other] = found;
    if (!one || !other) return { kind: 'absent', missing: ids.filter((_, i) => !found[i]) };
    if (one.networkId !== other.networkId) return { kind: 'two-networks', names: [one.name, other.name] };
    const fallen = [one, other].filter(({ current }) => !current);
    if (fallen.length > 0) return { kind: 'fallen', names: fallen.map(({ name }) => name) };
    const { networkId } = one;
    this.networks.choose(networkId);
    const mayList = this.session.may('coincidence:list');
    const [frames, sets, from] = await Promise.all([
      allOf((query) => this.api.call(FRAME_ROUTES.listFrames, { params: { networkId }, query })),
      mayList ? this.setsOf(eventA, eventB) : undefined,
      setId === undefined || !mayList
        ? undefined
        : orAbsent(this.api.call(COINCIDENCE_ROUTES.readCoincidence, { params: { coincidenceId: setId } })),
    ]);
    const sigmas = asked.sigmas ?? from?.ruleVersion.sigmas ?? USUAL_SIGMAS;
    const set = await orAbsent(this.api.call(PAIR_ROUTES.readPairs, { params: { networkId }, query: { events: ids, sigmas } }));
    const seen = set && pairSeen(set);
    if (!seen) return { kind: 'absent', missing: [] };
    return {
      kind: 'loaded',
      answers: { asked, set, seen, events: one.id === seen.a.id ? [one, other] : [other, one], frames, sets, from },
    };
  }

  /** The coincidences that hold both, in time order. */
  private async setsOf(eventA: number, eventB: number): Promise<readonly CoincidenceBrief[]> {
    const sets: CoincidenceBrief[] = [];
    let cursor: string | undefined;
    for (let page = 0; page < MOST_SET_PAGES; page++) {
      const query = { limit: PAGE, ...(cursor !== undefined && { cursor }) };
      const part = await this.api.call(EVENT_ROUTES.listCoincidencesOfEvent, { params: { eventId: eventA }, query });
      sets.push(...part.items.filter(({ members }) => members.some(({ eventId }) => eventId === eventB)));
      if (part.next === null) break;
      cursor = part.next;
    }
    return sets;
  }

  /** Whether changes may be of what is shown; undefined where they are not known one by one. */
  private touches(changes: NetworkChanges | undefined): boolean {
    if (!changes || changes.events.isCut || changes.coincidences.isCut || changes.hints.some(({ kind }) => TURNS_ALL.has(kind)))
      return true;
    const { eventA, eventB } = this.asked ?? { eventA: 0, eventB: 0 };
    const isOurs = (id: number): boolean => id === eventA || id === eventB;
    const shown = new Set(this.answers()?.sets?.map(({ id }) => id));
    return (
      changes.events.items.some(({ id }) => isOurs(id)) ||
      changes.events.gone.some(isOurs) ||
      changes.coincidences.items.some(({ members }) => members.filter(({ eventId }) => isOurs(eventId)).length === 2) ||
      [...changes.coincidences.ended, ...changes.coincidences.final].some((id) => shown.has(id))
    );
  }
}

/** What is there; undefined where it is not, or is not for who asks. */
async function orAbsent<T>(asked: Promise<T>): Promise<T | undefined> {
  try {
    return await asked;
  } catch (fault) {
    if (fault instanceof ApiProblem && fault.status === ABSENT) return undefined;
    throw fault;
  }
}

const failedBy = (fault: unknown): PairState => ({
  kind: 'failed',
  text: sentenceOf(fault),
  id: fault instanceof ApiProblem ? fault.id : undefined,
});
