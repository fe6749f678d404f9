import { computed, DestroyRef, inject, Injectable, signal } from '@angular/core';

/** A frame in which the page can show what it shows. */
export interface FrameOption {
  readonly code: string;
  readonly words: string;
  /** Speed along the axis of its glyph, in c. */
  readonly velocityC: number;
  readonly isShown: boolean;
  readonly choose: () => void;
}

/** The frames that a page offers. */
export interface FramesOffered {
  readonly shown: string;
  readonly velocityC: number;
  readonly options: readonly FrameOption[];
  /** Makes the shown frame one of the network's; absent where it is one, or may not be. */
  readonly pin: (() => unknown) | undefined;
}

/** Which frame the open page is in, and which it can be set to; pages that know no frame are geocentric. */
@Injectable({ providedIn: 'root' })
export class FrameChoice {
  private readonly list = signal<(() => FramesOffered) | undefined>(undefined);
  readonly offered = computed(() => this.list()?.());

  /** Offers frames for as long as the part that calls lives; to be called where it may inject. `list` may read signals. */
  offer(list: () => FramesOffered): void {
    this.list.set(list);
    inject(DestroyRef).onDestroy(() => this.list.update((now) => (now === list ? undefined : now)));
  }
}
