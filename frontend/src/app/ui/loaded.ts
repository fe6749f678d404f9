import { type Signal, signal, untracked } from '@angular/core';
import { ApiProblem, sentenceOf } from '../api/api-problem';

/** What a screen knows of something that it asked for. */
export type Loaded<T> =
  | { readonly kind: 'loading' }
  | { readonly kind: 'failed'; readonly text: string; readonly id: string | undefined; readonly status: number | undefined }
  | { readonly kind: 'loaded'; readonly value: T };

/** Something asked for, with its state as a signal. */
export class Loader<T> {
  private readonly now = signal<Loaded<T>>({ kind: 'loading' });
  private asked = 0;
  readonly state: Signal<Loaded<T>> = this.now.asReadonly();

  constructor(private readonly ask: () => Promise<T>) {}

  /**
   * Asks, and again: what is there stays on screen meanwhile, also where the server does not answer (the banner tells its age), and only the last
   * answer counts.
   */
  async load(): Promise<void> {
    const turn = ++this.asked;
    if (untracked(this.now).kind === 'failed') this.now.set({ kind: 'loading' });
    const state = await this.ask().then(
      (value): Loaded<T> => ({ kind: 'loaded', value }),
      (fault: unknown): Loaded<T> => ({ kind: 'failed', text: sentenceOf(fault), ...ofProblem(fault) }),
    );
    if (turn !== this.asked) return;
    const isUnanswered = state.kind === 'failed' && state.status === 0;
    if (!isUnanswered || untracked(this.now).kind !== 'loaded') this.now.set(state);
  }

  /** Changes what is there by what an answer said. */
  update(change: (value: T) => T): void {
    this.now.update((state) => (state.kind === 'loaded' ? { kind: 'loaded', value: change(state.value) } : state));
  }

  /** What is there; undefined until it is. */
  value(): T | undefined {
    const state = this.now();
    return state.kind === 'loaded' ? state.value : undefined;
  }
}

const ofProblem = (fault: unknown) =>
  fault instanceof ApiProblem ? { id: fault.id, status: fault.status } : { id: undefined, status: undefined };
