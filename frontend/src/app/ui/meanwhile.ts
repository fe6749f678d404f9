import { type Signal, signal } from '@angular/core';
import { ApiProblem } from '../api/api-problem';

/** One thing that differs between what was read first and what stands now. */
export interface Difference {
  readonly name: string;
  readonly was: string;
  readonly now: string;
}

/** What a thing says, word by word, as the person reads it. */
export type Words = Readonly<Record<string, string>>;

/** What differs between two states of the same thing. */
export function differences(was: Words, now: Words): readonly Difference[] {
  const names = [...new Set([...Object.keys(was), ...Object.keys(now)])];
  return names.filter((name) => was[name] !== now[name]).map((name) => ({ name, was: was[name] ?? 'none', now: now[name] ?? 'none' }));
}

const CHANGED = 409;

/** Tells someone whose edit came too late what was changed meanwhile, and lets them send what they typed again, over what stands now. */
export class Meanwhile<T> {
  private readonly found = signal<readonly Difference[] | undefined>(undefined);
  /** Undefined while nothing came between. */
  readonly differences: Signal<readonly Difference[] | undefined> = this.found.asReadonly();

  /**
   * @param read the thing as it stands now
   * @param words what it says
   */
  constructor(
    private readonly read: () => Promise<T>,
    private readonly words: (thing: T) => Words,
  ) {}

  /**
   * Does an edit of what was seen.
   *
   * @param seen the thing that the edit names the version of
   * @param act sends the edit
   * @param onFresh is given the thing as it stands, after someone else changed it
   * @throws what the edit was refused with
   */
  async around<R>(seen: T, act: () => Promise<R>, onFresh: (fresh: T) => void): Promise<R> {
    this.found.set(undefined);
    try {
      return await act();
    } catch (fault) {
      if (fault instanceof ApiProblem && fault.status === CHANGED && fault.where === 'version') {
        const fresh = await this.read();
        this.found.set(differences(this.words(seen), this.words(fresh)));
        onFresh(fresh);
      }
      throw fault;
    }
  }
}
