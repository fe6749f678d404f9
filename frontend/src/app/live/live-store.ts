import { computed, DestroyRef, effect, inject, Injectable, signal, untracked } from '@angular/core';
import { takeUntilDestroyed, toObservable } from '@angular/core/rxjs-interop';
import { fromEvent, interval, map, type Observable, Subject } from 'rxjs';
import { type NetworkChanges } from '#shared/contract/live-changes';
import { type Follower, followerOf, type MissedPart } from '#shared/contract/live-follower';
import { MY_ROUTES } from '#shared/contract/people-routes';
import { type SiteStateNow, type SiteStates } from '#shared/contract/site-state';
import { type Instant } from '#shared/time/instant';
import { ApiClient } from '../api/api-client';
import { ConnectionStore } from '../connection/connection-store';
import { NetworkStore } from '../networks/network-store';
import { SessionStore } from '../session/session-store';
import { dataAge } from './data-age';
import { joined, type Joined } from './joined';
import { type LiveSocket, OPEN_LIVE_SOCKET, type OneNews, type Unlinked } from './live-socket';
import { retryMs } from './retry-ms';

const TICK_MS = 1_000;
const BUSY_MS = 2_000;

/** Off: nobody is signed in, or there is no network. */
export type LivePhase = 'off' | 'connecting' | 'live' | 'catching-up' | 'offline';

interface StatesTold {
  readonly states: SiteStates;
  readonly atMs: number;
}

/**
 * What comes of the network that all pages are about, as it comes: the only socket of the page. It follows the network whatever the link
 * does; after the server was away it asks for what it missed, and nothing is lost or told twice.
 *
 * A page that shows a list takes `join`, which reads the list and puts every change over it.
 */
@Injectable({ providedIn: 'root' })
export class LiveStore {
  private readonly api = inject(ApiClient);
  private readonly connection = inject(ConnectionStore);
  private readonly session = inject(SessionStore);
  private readonly networks = inject(NetworkStore);
  private readonly openSocket = inject(OPEN_LIVE_SOCKET);

  private readonly phaseNow = signal<LivePhase>('off');
  private readonly numberNow = signal<number | undefined>(undefined);
  private readonly completeNow = signal<Instant | null>(null);
  private readonly statesTold = signal<StatesTold | undefined>(undefined);
  private readonly told = new Subject<NetworkChanges>();
  private readonly again = new Subject<void>();
  private readonly settled = toObservable(this.phaseNow).pipe(map((phase) => phase !== 'connecting'));

  readonly phase = this.phaseNow.asReadonly();
  /** The number up to which all changes were told; undefined until the network is followed. */
  readonly number = this.numberNow.asReadonly();
  /** Up to when the network is complete; null while a site has said nothing. */
  readonly completeTo = this.completeNow.asReadonly();
  /** The sites that may be seen, by their codes, as they were told last. */
  readonly sites = computed<readonly SiteStateNow[]>(() => this.statesTold()?.states.sites ?? []);
  /** Every change once and in order, each message from where the one before ended, until `anew`. */
  readonly changes: Observable<NetworkChanges> = this.told.asObservable();
  /** What was read and told before can no longer be gone on from: read it again. Also when a network is first followed. */
  readonly anew: Observable<void> = this.again.asObservable();

  private readonly follows = computed(() => {
    const [personId, networkId] = [this.session.me()?.id, this.networks.network()?.id];
    return personId === undefined || networkId === undefined ? undefined : `${personId} ${networkId}`;
  });
  private networkId = 0;
  private follower: Follower | undefined;
  private socket: LiveSocket | undefined;
  private retry: ReturnType<typeof setTimeout> | undefined;
  private tries = 0;
  private isRenewing = false;
  private turn = 0;

  constructor() {
    effect(() => {
      const follows = this.follows();
      untracked(() => void this.begin(follows === undefined ? undefined : this.networks.network()?.id));
    });
    interval(TICK_MS)
      .pipe(takeUntilDestroyed())
      .subscribe(() => this.tick());
    fromEvent(window, 'online')
      .pipe(takeUntilDestroyed())
      .subscribe(() => this.phaseNow() === 'offline' && this.link());
    inject(DestroyRef).onDestroy(() => this.end());
  }

  /**
   * A list and what follows it, without a gap and without a double, for as long as it is subscribed to.
   *
   * @param load reads the list over HTTP; of several pages it gives the least `change`
   */
  join<T extends { readonly change: number }>(load: () => Promise<T>): Observable<Joined<T>> {
    return joined({ changes: this.changes, anew: this.anew, isSettled: this.settled }, load);
  }

  private async begin(networkId: number | undefined): Promise<void> {
    this.end();
    if (networkId === undefined) return;
    const turn = ++this.turn;
    this.networkId = networkId;
    this.follower = this.newFollower(turn);
    this.phaseNow.set('connecting');
    const socket = await this.openSocket({
      linked: () => void this.follow(turn),
      unlinked: (why) => this.unlinked(turn, why),
      news: (one) => turn === this.turn && this.hear(one, turn),
    });
    if (turn !== this.turn) {
      socket.close();
      return;
    }
    this.socket = socket;
    this.link();
  }

  private end(): void {
    this.turn++;
    clearTimeout(this.retry);
    this.retry = undefined;
    this.socket?.close();
    this.socket = undefined;
    this.follower = undefined;
    this.tries = 0;
    this.phaseNow.set('off');
    this.numberNow.set(undefined);
    this.completeNow.set(null);
    this.statesTold.set(undefined);
    this.connection.feed(undefined);
  }

  private newFollower(turn: number): Follower {
    return followerOf({
      missed: (after) => this.missed(after, turn),
      told: (changes) => {
        this.numberNow.set(changes.to);
        this.completeNow.set(changes.completeTo);
        this.told.next(changes);
      },
      anew: () => {
        this.numberNow.set(this.follower?.had());
        this.again.next();
      },
      isCatchingUp: (catching) => {
        if (turn !== this.turn || (this.phaseNow() !== 'live' && this.phaseNow() !== 'catching-up')) return;
        this.phaseNow.set(catching ? 'catching-up' : 'live');
        this.feed();
      },
    });
  }

  private link(): void {
    clearTimeout(this.retry);
    this.retry = undefined;
    this.socket?.link();
  }

  private async follow(turn: number): Promise<void> {
    const { socket, follower } = this;
    if (turn !== this.turn || !socket || !follower) return;
    this.tries = 0;
    this.connection.reached();
    const after = follower.had();
    try {
      const answer = await socket.ask('network:follow', { networkId: this.networkId, ...(after !== undefined && { after }) });
      if (turn !== this.turn) return;
      if (!answer.ok) {
        if (answer.code === 'absent') this.phaseNow.set('off');
        else this.retry = setTimeout(() => void this.follow(turn), answer.retryAfterMs ?? BUSY_MS);
        return;
      }
      this.phaseNow.set('live');
      this.takeStates(answer.states);
      follower.begin(answer);
      if (after === undefined || !answer.isKept) this.completeNow.set(answer.states.completeTo);
    } catch {
      // The link was lost before the answer: `unlinked` tells so, and links again.
    }
  }

  private async missed(after: number, turn: number): Promise<MissedPart> {
    for (;;) {
      const socket = turn === this.turn ? this.socket : undefined;
      if (!socket) throw new Error('the link is lost');
      const answer = await socket.ask('network:missed', { networkId: this.networkId, after });
      if (answer.ok) return answer;
      if (answer.code === 'too-old') return undefined;
      if (answer.code !== 'busy' && answer.code !== 'unknown') throw new Error(answer.text);
      await new Promise((resolve) => setTimeout(resolve, answer.retryAfterMs ?? BUSY_MS));
    }
  }

  private unlinked(turn: number, why: Unlinked): void {
    if (turn !== this.turn || this.phaseNow() === 'off' || this.retry !== undefined || this.isRenewing) return;
    this.phaseNow.set('offline');
    if (why?.code === 'sign-in') {
      void this.renew(turn);
      return;
    }
    void this.connection.ask();
    this.linkLater(why?.retryAfterMs);
  }

  private linkLater(askedMs: number | undefined): void {
    this.retry ??= setTimeout(() => this.link(), retryMs(this.tries++, askedMs, Math.random()));
  }

  /** The session is to be renewed, or begun again by its password, as at any call. */
  private async renew(turn: number): Promise<void> {
    this.isRenewing = true;
    await this.api.call(MY_ROUTES.readMe, {}).catch(() => undefined);
    this.isRenewing = false;
    if (turn === this.turn) this.linkLater(undefined);
  }

  private hear(one: OneNews, turn: number): void {
    switch (one.name) {
      case 'network:changed':
        if (one.news.networkId === this.networkId) this.follower?.changed(one.news);
        return;
      case 'site:states':
        if (one.news.networkId === this.networkId) this.takeStates(one.news);
        return;
      case 'network:ended':
        this.follower = this.newFollower(turn);
        void this.follow(turn);
        return;
      case 'live:ended':
        this.unlinked(turn, one.news.code === 'sign-in' ? { code: 'sign-in', text: one.news.text } : { ...one.news, code: 'busy' });
    }
  }

  private takeStates(states: SiteStates): void {
    this.statesTold.set({ states, atMs: performance.now() });
    this.completeNow.set(states.completeTo);
    this.feed();
  }

  private tick(): void {
    if (this.phaseNow() === 'off') return;
    if (this.phaseNow() === 'live' || this.phaseNow() === 'catching-up') void this.api.keepSession().catch(() => undefined);
    this.feed();
  }

  /** Tells the top bar how old what is shown is. */
  private feed(): void {
    const told = this.statesTold();
    if (!told) return;
    const { behindS, isQuiet } = dataAge(told.states, performance.now() - told.atMs);
    const phase = this.phaseNow();
    const state = phase === 'live' ? (isQuiet ? 'quiet' : 'live') : 'catching-up';
    this.connection.feed({ state, behindS, completeUpTo: this.completeNow() ?? undefined });
  }
}
