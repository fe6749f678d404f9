import { effect, Injectable, signal, type WritableSignal } from '@angular/core';
import { SWITCH, type Theme, THEMES } from '#shared/contract/preference-routes';
import { SCALES, type Scale } from '#shared/time/scales';

/** How this browser shows things; kept in it, since it tells nothing about anyone. `static/theme.js` reads the theme before Angular does. */
@Injectable({ providedIn: 'root' })
export class Preferences {
  readonly theme = kept<Theme>('skewline-theme', THEMES, 'system');
  /** The scale in which instants are printed. */
  readonly scale = kept<Scale>('skewline-scale', SCALES, 'UTC');
  /** Whether single keys act. */
  readonly shortcuts = kept('skewline-shortcuts', SWITCH, 'on');

  constructor() {
    effect(() => {
      const theme = this.theme();
      const { dataset } = document.documentElement;
      if (theme === 'system') delete dataset['theme'];
      else dataset['theme'] = theme;
    });
  }

  /** The next scale: UTC, TAI, GPS, TT and round again. */
  nextScale(): void {
    this.scale.update((now) => SCALES[(SCALES.indexOf(now) + 1) % SCALES.length] ?? 'UTC');
  }
}

/** A signal that is written into the browser's storage, and read from it at the start where what it holds is allowed. */
function kept<T extends string>(key: string, allowed: readonly T[], usual: T): WritableSignal<T> {
  const stored = localStorage.getItem(key);
  const value = signal<T>(allowed.find((one) => one === stored) ?? usual);
  effect(() => localStorage.setItem(key, value()));
  return value;
}
