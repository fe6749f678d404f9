import { computed, effect, inject, Injectable, signal, untracked } from '@angular/core';
import { type CoincidenceBrief } from '#shared/contract/coincidence';
import { COINCIDENCE_ROUTES } from '#shared/contract/coincidence-routes';
import { ApiClient } from '../api/api-client';
import { NetworkStore } from '../networks/network-store';
import { SessionStore } from '../session/session-store';
import { Loader } from '../ui/loaded';
import { DeskPlace } from './desk-place';
import { foldSets } from './fold-sets';

const PAGE = 200;

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
  readonly isFollowing = signal(true);
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

  /** Something has changed: takes it in at the live edge, else keeps it until it is asked for. */
  async renew(): Promise<void> {
    if (!this.maySee() || this.part.state().kind !== 'loaded') return;
    const part = await this.ask(undefined).catch(() => undefined);
    if (!part) return;
    const shown = this.part.value()?.items ?? [];
    if (this.isFollowing() || shown.length === 0) this.take(part);
    else {
      // What is shown goes on to say what is so of it: a state, a chance.
      const now = new Map(part.items.map((item) => [item.id, item]));
      this.part.update(({ items, next }) => ({ items: items.map((item) => now.get(item.id) ?? item), next }));
      this.waiting.set(part);
    }
  }

  /** Shows what has come meanwhile. */
  takeNew(): void {
    const part = this.waiting();
    if (part) this.take(part);
    this.isFollowing.set(true);
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
    this.isFollowing.set(true);
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
