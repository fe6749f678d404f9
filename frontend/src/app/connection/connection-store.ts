import { HttpClient } from '@angular/common/http';
import { computed, DestroyRef, inject, Injectable, signal } from '@angular/core';
import { firstValueFrom, fromEvent, interval, merge } from 'rxjs';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { type Instant } from '#shared/time/instant';
import { deviceInstant } from '../instants/server-instant';

const ASK_EVERY_MS = 15_000;

/** How the data on screen stand to the network's. */
export interface Stream {
  readonly state: 'live' | 'catching-up' | 'quiet';
  /** Seconds between the newest record's arrival and now. */
  readonly behindS: number;
  /** The instant before which every site has sent all it has. */
  readonly completeUpTo: Instant | undefined;
}

/**
 * Whether the server is reached, and how old what is shown is. Whoever holds the live connection feeds `stream`, and `reached` with each sign
 * of life; until one does, the server is asked now and again whether it answers.
 */
@Injectable({ providedIn: 'root' })
export class ConnectionStore {
  private readonly http = inject(HttpClient);
  private readonly lost = signal<Instant | undefined>(undefined);
  private readonly streaming = signal<Stream | undefined>(undefined);
  private lastReached = deviceInstant();
  private watching = false;

  /** Undefined while nothing streams. */
  readonly stream = this.streaming.asReadonly();
  /** When the server was last reached, by this device's clock, while it is not. */
  readonly offlineSince = this.lost.asReadonly();
  readonly offline = computed(() => this.lost() !== undefined);
  readonly asking = signal(false);

  constructor() {
    inject(DestroyRef).onDestroy(() => (this.watching = false));
    merge(interval(ASK_EVERY_MS), fromEvent(window, 'online'), fromEvent(window, 'offline'))
      .pipe(takeUntilDestroyed())
      .subscribe(() => {
        if (this.watching && document.visibilityState === 'visible') void this.ask();
      });
  }

  /** Begins to ask whether the server answers. */
  watch(): void {
    this.watching = true;
  }

  /** Asks the server once. */
  async ask(): Promise<void> {
    this.asking.set(true);
    try {
      await firstValueFrom(this.http.get('/api/health'));
      this.reached();
    } catch {
      this.unreached();
    }
    this.asking.set(false);
  }

  feed(stream: Stream | undefined): void {
    this.streaming.set(stream);
  }

  reached(): void {
    this.lastReached = deviceInstant();
    this.lost.set(undefined);
  }

  unreached(): void {
    this.lost.update((since) => since ?? this.lastReached);
  }
}
