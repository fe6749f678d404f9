import { type Signal, signal, type WritableSignal } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { calmly } from './calmly';

describe('a calm signal', () => {
  let source: WritableSignal<number>;
  let calm: Signal<number>;

  beforeEach(() => {
    vi.useFakeTimers();
    source = signal(0);
    calm = TestBed.runInInjectionContext(() => calmly(source, 100));
    TestBed.tick();
    vi.advanceTimersByTime(1_000);
  });
  afterEach(() => vi.useRealTimers());

  const set = (value: number): void => {
    source.set(value);
    TestBed.tick();
  };

  it('has a first change at once', () => {
    set(1);
    expect(calm()).toBe(1);
  });

  it('keeps to its pace while the other one changes, and ends at its last value', () => {
    const seen = new Set<number>();
    for (let value = 1; value <= 30; value++) {
      set(value);
      seen.add(calm());
      vi.advanceTimersByTime(10);
    }
    expect(seen.size).toBeLessThanOrEqual(4); // 300 ms of changes
    vi.advanceTimersByTime(100);
    expect(calm()).toBe(30);
  });
});
