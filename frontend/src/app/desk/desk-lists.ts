import { computed, effect, inject, Injectable, signal, untracked } from '@angular/core';
import { type CoincidenceBrief } from '#shared/contract/coincidence';
import { COINCIDENCE_ROUTES } from '#shared/contract/coincidence-routes';
import { ApiClient } from '../api/api-client';
import { NetworkStore } from '../networks/network-store';
import { SessionStore } from '../session/session-store';
import { Loader } from '../ui/loaded';
import { DeskPlace } from './desk-place';
import { type DeskNews, withRows } from './desk-source';
import { foldSets } from './fold-sets';
import { compareInstants } from '#shared/time/instant';

const PAGE = 200;
const MOST_FOLLOWED = 2_000;

interface Part {
  readonly items: readonly CoincidenceBrief[];
  readonly next: string | null;
}

/**
 * The coincidences of the desk, page by page in the order that is asked for. While someone reads further down, what comes new waits until they
 * take it in: rows never jump under the pointer.
 */
@Injectable()
export class DeskLists {
  private readonly api = inject(ApiClient);
  private readonly networks = inject(NetworkStore);
  private readonly place = inject(DeskPlace);
  private readonly session = inject(SessionStore);
  private readonly waiting = signal<Part | undefined>(undefined);
  private isAdding = false;
  /** Whether the reader is at the live edge. */
  readonly isAtEdge = signal(true);
  /** Whether the pointer or the keyboard is on the rows, which then stay where they are. */
  private readonly isHeld = signal(false);
  private readonly isFollowing = computed(() => this.isAtEdge() && !this.isHeld());
  readonly maySee = computed(() => this.session.may('coincidence:list'));
  readonly part = new Loader<Part>(() => this.ask(undefined));
  readonly rows = computed(() => foldSets(this.part.value()?.items ?? []));
  /** How many there are that are not shown yet. */
  readonly newCount = computed(() => {
    const shown = new Set((this.part.value()?.items ?? []).map(({ id }) => id));
    return (this.waiting()?.items ?? []).filter(({ id }) => !shown.has(id)).length;
  });

  private readonly filter = computed(
    () => {
      const { class: ofClass, leastFold, state, sort, order } = this.place.address();
      return { class: ofClass, leastFold, state, sort, order };
    },
    { equal: (a, b) => JSON.stringify(a) === JSON.stringify(b) },
  );

  constructor() {
    effect(() => {
      this.filter();
      if (this.networks.network() && this.maySee()) untracked(() => void this.begin());
    });
  }

  /** Takes news in at the live edge, else keeps it until it is asked for; what it could not tell is read again. */
  async hear({ coincidences, hasRecords }: DeskNews): Promise<void> {
    if (!this.maySee() || !hasRecords || this.part.state().kind !== 'loaded') return;
    const base = this.waiting() ?? this.part.value() ?? { items: [], next: null };
    const { sort, order } = this.filter();
    const isPlain = sort === 'time' && order === 'down';
    if (coincidences && isPlain && isEmpty(coincidences)) return;
    const part = coincidences && isPlain ? this.withNews(base, coincidences) : await this.ask(undefined).catch(() => undefined);
    if (!part) return;
    if (this.isFollowing() || (this.part.value()?.items ?? []).length === 0) {
      this.take(part);
      return;
    }
    // What is shown goes on to say what is so of it: a state, a chance.
    const now = new Map(part.items.map((item) => [item.id, item]));
    this.part.update(({ items, next }) => ({ items: items.map((item) => now.get(item.id) ?? item), next }));
    this.waiting.set(part);
  }

  /** Reads everything again. */
  async renew(): Promise<void> {
    if (this.maySee()) await this.begin();
  }

  private withNews({ items, next }: Part, news: NonNullable<DeskNews['coincidences']>): Part {
    const { class: ofClass, leastFold = 0, state } = this.filter();
    const isWanted = (one: CoincidenceBrief): boolean =>
      (ofClass === undefined || one.class === ofClass) && one.fold >= leastFold && (state === undefined || one.state === state);
    const final = new Set(news.final);
    const now = withRows(items, news).map((one) => (final.has(one.id) && one.state === 'open' ? { ...one, state: 'final' as const } : one));
    const sorted = now.filter(isWanted).sort((a, b) => compareInstants(b.first, a.first) || b.id - a.id);
    // At the live edge the list does not grow without end; whoever wants to go further back than that filters or sorts.
    return { items: sorted.slice(0, MOST_FOLLOWED), next: sorted.length > MOST_FOLLOWED ? null : next };
  }

  /** Shows what has come meanwhile. */
  takeNew(): void {
    const part = this.waiting();
    if (part) this.take(part);
    this.isAtEdge.set(true);
  }

  /** Holds the rows while someone points at them; lets them go on after. */
  hold(isHeld: boolean): void {
    this.isHeld.set(isHeld);
    if (!isHeld && this.isAtEdge()) this.takeNew();
  }

  async more(): Promise<void> {
    const next = this.part.value()?.next;
    if (next == null || this.isAdding) return;
    this.isAdding = true;
    const came = await this.ask(next).catch(() => undefined);
    this.isAdding = false;
    if (!came) return;
    this.part.update(({ items }) => {
      const known = new Set(items.map(({ id }) => id));
      return { items: [...items, ...came.items.filter(({ id }) => !known.has(id))], next: came.next };
    });
  }

  private async begin(): Promise<void> {
    this.waiting.set(undefined);
    this.isAtEdge.set(true);
    await this.part.load();
  }

  private take(part: Part): void {
    this.waiting.set(undefined);
    this.part.update(() => part);
  }

  private async ask(cursor: string | undefined): Promise<Part> {
    const networkId = this.networks.network()?.id ?? 0;
    const query = { ...this.filter(), limit: PAGE, ...(cursor !== undefined && { cursor }) };
    const { items, next } = await this.api.call(COINCIDENCE_ROUTES.listCoincidences, { params: { networkId }, query });
    return { items, next };
  }
}

const isEmpty = ({ items, gone, final }: NonNullable<DeskNews['coincidences']>): boolean => items.length + gone.length + final.length === 0;
