import { effect, inject, Injectable, untracked } from '@angular/core';
import { PREFERENCE_ROUTES, type Showing } from '#shared/contract/preference-routes';
import { ApiClient } from '../api/api-client';
import { SessionStore } from '../session/session-store';
import { Preferences } from './preferences';

/** Keys are pressed in a row: only where they came to rest is told. */
const REST_MS = 700;

/** Carries what someone chose from browser to browser: theirs is taken up when they sign in, and each choice from then on is told. */
@Injectable({ providedIn: 'root' })
export class MyPreferences {
  private readonly api = inject(ApiClient);
  private readonly session = inject(SessionStore);
  private readonly preferences = inject(Preferences);
  /** What the server knows of this browser's choices; undefined until it was asked for whoever is signed in. */
  private told: Showing | undefined;
  private rest: ReturnType<typeof setTimeout> | undefined;

  constructor() {
    effect(() => {
      const isKnown = this.session.me()?.id !== undefined;
      untracked(() => {
        if (isKnown) void this.take();
        else this.forget();
      });
    });
    effect((onCleanup) => {
      const now = this.now();
      if (!this.told) return;
      this.rest = setTimeout(() => void this.tell(now), REST_MS);
      onCleanup(() => clearTimeout(this.rest));
    });
  }

  private now(): Showing {
    return { theme: this.preferences.theme(), scale: this.preferences.scale(), shortcuts: this.preferences.shortcuts() };
  }

  private forget(): void {
    clearTimeout(this.rest);
    this.told = undefined;
  }

  /** What was never said stays as this browser has it. */
  private async take(): Promise<void> {
    if (this.told) return;
    const said = await this.api.call(PREFERENCE_ROUTES.readMyPreferences, {}).catch(() => undefined);
    if (!said) return;
    if (said.theme) this.preferences.theme.set(said.theme);
    if (said.scale) this.preferences.scale.set(said.scale);
    if (said.shortcuts) this.preferences.shortcuts.set(said.shortcuts);
    this.told = this.now();
  }

  /** Tells what changed; where the server is not reached, the browser keeps it all the same. */
  private async tell({ theme, scale, shortcuts }: Showing): Promise<void> {
    const { told } = this;
    if (!told) return;
    const body = {
      ...(theme && theme !== told.theme && { theme }),
      ...(scale && scale !== told.scale && { scale }),
      ...(shortcuts && shortcuts !== told.shortcuts && { shortcuts }),
    };
    if (Object.keys(body).length === 0) return;
    this.told = { theme, scale, shortcuts };
    await this.api.call(PREFERENCE_ROUTES.changeMyPreferences, { body }).catch(() => (this.told = told));
  }
}
