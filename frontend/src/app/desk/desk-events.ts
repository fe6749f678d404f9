import { computed, effect, inject, Injectable, signal, untracked } from '@angular/core';
import { type CoincidenceBrief } from '#shared/contract/coincidence';
import { EVENT_ROUTES } from '#shared/contract/event-routes';
import { type Frame, FRAME_ROUTES } from '#shared/contract/frame-routes';
import { PAIR_ROUTES, type PairInFull, type PairsOfSet } from '#shared/contract/pair-routes';
import { compareInstants, type Instant } from '#shared/time/instant';
import { allOf } from '../api/all-of';
import { ApiClient } from '../api/api-client';
import { sentenceOf } from '../api/api-problem';
import { NetworkStore } from '../networks/network-store';
import { SessionStore } from '../session/session-store';
import { Loader } from '../ui/loaded';
import { DeskPlace } from './desk-place';
import { DESK_SOURCE, type DeskNews, MOST_SHOWN, withRows } from './desk-source';
import { instantAfter } from '../diagrams/instant-after';
import { NO_EVENTS, showEvents, type ShownEvents, type ShownSite } from './shown-events';

/** What is shown of time at first: of all sites, and around an event. */
export const USUAL_SPAN_MS = { sites: 20_000, event: 60, baseline: 60 } as const;
const LEAST_AROUND_MS = 1_000;
const ASK_PAIRS_AFTER_MS = 120;
const MOST_ASKED = 19; // frames beside the geocentric one
const MOST_KEPT = 1_000; // news while a list is read

/** The events of the desk, what the server says of their pairs, and the frames of the network. */
@Injectable()
export class DeskEvents {
  private readonly api = inject(ApiClient);
  private readonly source = inject(DESK_SOURCE);
  private readonly networks = inject(NetworkStore);
  private readonly session = inject(SessionStore);
  private readonly place = inject(DeskPlace);
  private readonly held = signal<ShownEvents>(NO_EVENTS);
  private readonly told = signal('');
  private readonly newest = signal<Instant | undefined>(undefined);
  private readonly answered = signal<PairsOfSet | undefined>(undefined);
  private readonly asking = signal(true);
  /** What is held of time; both ends belong to it. */
  private span: { readonly from: Instant; readonly to: Instant | undefined } | undefined;
  /** What was told while a list was read: put over it, since it may be older. */
  private readonly meanwhile: DeskNews[] = [];
  private turn = 0;
  private pairsTimer: ReturnType<typeof setTimeout> | undefined;
  private pairsAsked = '';

  readonly events = this.held.asReadonly();
  /** Whether events are on their way and none is there yet. */
  readonly isLoading = computed(() => (this.asking() || this.networks.sites.state().kind === 'loading') && this.held().columns.count === 0);
  readonly isReading = this.asking.asReadonly();
  readonly fault = this.told.asReadonly();
  /** The latest event of the network. */
  readonly edge = this.newest.asReadonly();
  readonly pairs = this.answered.asReadonly();

  readonly sites = computed<readonly ShownSite[]>(
    () =>
      (this.networks.sites.value() ?? [])
        .filter(({ closedAt }) => closedAt === null)
        .map(({ id, code, name, details }) => ({ id, code, name, positionSigmaM: details.now?.positionSigmaM ?? 0 })),
    { equal: (a, b) => JSON.stringify(a) === JSON.stringify(b) },
  );
  readonly frames = new Loader<readonly Frame[]>(() => {
    const networkId = this.networks.network()?.id;
    return networkId === undefined || !this.session.may('frame:list')
      ? Promise.resolve([])
      : allOf((query) => this.api.call(FRAME_ROUTES.listFrames, { params: { networkId }, query }));
  });
  /** Frames whose orders stand in the tables, in their order. */
  readonly pinned = computed(() =>
    (this.frames.value() ?? [])
      .filter(({ pinned, resolved }) => pinned !== null && resolved !== null)
      .sort((a, b) => (a.pinned ?? 0) - (b.pinned ?? 0)),
  );
  /** Those of which pairs are asked: the pinned ones, and the one that the desk is in. */
  readonly inTables = computed<readonly Frame[]>(
    () => {
      const code = this.place.address().frame;
      const shown = (this.frames.value() ?? []).filter((frame) => frame.code === code && frame.pinned === null && frame.resolved !== null);
      return [...this.pinned().slice(0, MOST_ASKED - shown.length), ...shown];
    },
    { equal: (a, b) => a.length === b.length && a.every((frame, i) => frame === b[i]) },
  );
  /** The coincidences that hold the event around which the desk is. */
  readonly setsOfEvent = new Loader<readonly CoincidenceBrief[]>(async () => {
    const eventId = this.place.address().event;
    if (eventId === undefined || !this.session.may('coincidence:list')) return [];
    const { items } = await this.api.call(EVENT_ROUTES.listCoincidencesOfEvent, { params: { eventId }, query: { limit: 50 } });
    return [...items].sort((a, b) => b.fold - a.fold);
  });

  private readonly asked = computed(
    () => {
      const { view, event, until, spanMs = USUAL_SPAN_MS[view] } = this.place.address();
      // What is held reaches over what is shown, so that a small move asks for nothing.
      const reachMs = 2 ** Math.ceil(Math.log2(view === 'sites' ? spanMs * 1.3 : Math.max(LEAST_AROUND_MS, 2 * spanMs)));
      return { networkId: this.networks.network()?.id, view, event, until, reachMs };
    },
    { equal: (a, b) => JSON.stringify(a) === JSON.stringify(b) },
  );

  constructor() {
    effect(() => {
      this.asked();
      this.sites();
      untracked(() => void this.load());
    });
    effect(() => {
      if (this.networks.network()) untracked(() => void this.frames.load());
    });
    const event = computed(() => this.place.address().event);
    effect(() => {
      event();
      if (this.networks.network()) untracked(() => void this.setsOfEvent.load());
    });
  }

  /** Reads again what is in the span. */
  async load(): Promise<void> {
    const { networkId, view, event, until, reachMs } = this.asked();
    const sites = this.sites();
    if (networkId === undefined || sites.length === 0) {
      this.held.set(NO_EVENTS);
      this.asking.set(false);
      return;
    }
    const turn = ++this.turn;
    this.asking.set(true);
    this.meanwhile.length = 0;
    try {
      const params = { networkId };
      const [latest] = (await this.api.call(EVENT_ROUTES.listEvents, { params, query: { order: 'down', limit: 1 } })).items;
      if (turn !== this.turn) return;
      this.newest.set(latest?.at);
      const centre = view === 'sites' ? (until ?? latest?.at) : await this.instantOf(event);
      const isLive = view === 'sites' && until === undefined;
      if (!centre) {
        this.span = isLive ? { from: { taiS: 0, ps: 0 }, to: undefined } : undefined; // for the first event of all
        this.held.set(NO_EVENTS);
        this.told.set('');
        for (const news of this.meanwhile) this.takeIn(news);
        return;
      }
      const from = instantAfter(centre, -reachMs);
      const to = instantAfter(centre, view === 'sites' ? 0.001 : reachMs);
      const events = await this.source.events(networkId, from, to);
      if (turn !== this.turn) return;
      this.span = { from, to: isLive ? undefined : to };
      this.held.set(showEvents(events, sites));
      for (const news of this.meanwhile) this.takeIn(news);
      this.told.set('');
    } catch (fault) {
      if (turn === this.turn) this.told.set(sentenceOf(fault));
    } finally {
      if (turn === this.turn) this.asking.set(false);
    }
  }

  /** Puts news over what is held; reads again what could not be told. */
  hear(news: DeskNews): void {
    if (this.asking() && this.meanwhile.length < MOST_KEPT) this.meanwhile.push(news);
    if (news.events === undefined && !this.asking()) void this.load();
    else this.takeIn(news);
  }

  private takeIn({ events }: DeskNews): void {
    if (!events) return;
    if (!this.span || (events.items.length === 0 && events.gone.length === 0)) return;
    const latest = events.items.reduce((last, { at }) => (!last || compareInstants(at, last) > 0 ? at : last), this.newest());
    this.newest.set(latest);
    const { to } = this.span;
    const from = to || !latest ? this.span.from : later(this.span.from, instantAfter(latest, -this.asked().reachMs));
    this.span = { from, to };
    const isIn = (at: Instant): boolean => compareInstants(at, from) >= 0 && (!to || compareInstants(at, to) <= 0);
    const briefs = withRows(this.held().briefs, events).filter(({ at }) => isIn(at));
    if (briefs.length !== this.held().briefs.length || briefs.some((brief, i) => brief !== this.held().briefs[i]))
      this.held.set(showEvents(briefs.slice(-MOST_SHOWN), this.sites()));
  }

  /** Asks for all pairs of these events; what was answered for more of them serves too. */
  askPairs(eventIds: readonly number[]): void {
    const networkId = this.networks.network()?.id;
    const known = new Set(this.answered()?.events.map(({ id }) => id));
    const codes = this.inTables().map(({ code }) => code);
    const sameFrames = JSON.stringify(this.answered()?.frames.map(({ code }) => code)) === JSON.stringify(['geocentric', ...codes]);
    if (networkId === undefined || eventIds.length < 2 || (sameFrames && eventIds.every((id) => known.has(id)))) return;
    const key = JSON.stringify([networkId, eventIds, codes]);
    if (key === this.pairsAsked) return;
    this.pairsAsked = key;
    clearTimeout(this.pairsTimer);
    this.pairsTimer = setTimeout(() => {
      const query = { events: eventIds.join(','), frames: ['geocentric', ...codes].join(',') };
      // The client writes what a query holds as text; the types say what the server reads it as.
      const asked = { params: { networkId }, query: query as never };
      this.api.call(PAIR_ROUTES.readPairs, asked).then(
        (pairs) => {
          if (this.pairsAsked === key) this.answered.set(pairs);
        },
        (fault: unknown) => {
          if (this.pairsAsked !== key) return;
          this.pairsAsked = '';
          this.told.set(sentenceOf(fault));
        },
      );
    }, ASK_PAIRS_AFTER_MS);
  }

  /** Forgets what was said of pairs: something that they rest on has changed. */
  forgetPairs(): void {
    this.pairsAsked = '';
    this.answered.set(undefined);
  }

  private async instantOf(eventId: number | undefined): Promise<Instant | undefined> {
    if (eventId === undefined) return undefined;
    const row = this.held().rowOf.get(eventId);
    const known = row === undefined ? undefined : this.held().briefs[row]?.at;
    if (known) return known;
    const { current } = await this.api.call(EVENT_ROUTES.readEvent, { params: { eventId } });
    return current?.at;
  }
}

const later = (a: Instant, b: Instant): Instant => (compareInstants(a, b) > 0 ? a : b);

/** A pair as one of its events sees it. */
export interface PairSeen {
  readonly pair: PairInFull;
  /** Whether the event that sees it is the earlier. */
  readonly isFirst: boolean;
}

/** Pairs by the ids of their events. */
export class PairBook {
  private readonly pairs = new Map<string, PairSeen>();

  constructor(answer: PairsOfSet | undefined) {
    for (const pair of answer?.pairs ?? []) {
      const [a, b] = [answer?.events[pair.a - 1]?.id ?? 0, answer?.events[pair.b - 1]?.id ?? 0];
      this.pairs.set(`${a} ${b}`, { pair, isFirst: true });
      this.pairs.set(`${b} ${a}`, { pair, isFirst: false });
    }
  }

  of(eventId: number, otherId: number): PairSeen | undefined {
    return this.pairs.get(`${eventId} ${otherId}`);
  }
}
