import { DestroyRef, effect, inject, signal, type Signal, untracked } from '@angular/core';

/**
 * Follows a signal, at most so often: for figures that nobody reads while they change with each frame. A first change is there at once, and
 * the last one at the end.
 *
 * @param source what is followed
 * @param everyMs the least time between two values
 */
export function calmly<T>(source: Signal<T>, everyMs: number): Signal<T> {
  const calm = signal(untracked(source));
  let lastMs = -Infinity;
  let timer: ReturnType<typeof setTimeout> | undefined;
  const take = (): void => {
    timer = undefined;
    lastMs = performance.now();
    calm.set(untracked(source));
  };
  effect(() => {
    source();
    if (timer !== undefined) return;
    const waitMs = lastMs + everyMs - performance.now();
    if (waitMs <= 0) take();
    else timer = setTimeout(take, waitMs);
  });
  inject(DestroyRef).onDestroy(() => clearTimeout(timer));
  return calm.asReadonly();
}
