import { Injectable } from '@angular/core';
import { ApiProblem } from './api-problem';

/** The access cookie lives ten minutes; it is renewed a minute before, and sooner than that nothing is asked. */
const RENEW_AFTER_MS = 9 * 60 * 1000;
/** When the session was last begun or renewed, for all tabs: no secret, the cookies themselves are out of reach for scripts. */
const RENEWED_AT = 'skewline-renewed-at-ms';
const LOCK = 'skewline-renewal';

/**
 * Keeps the session of this browser alive. A refresh token works once, and its second use ends the session: so one tab renews at a time, and
 * those that waited see that it is done.
 */
@Injectable({ providedIn: 'root' })
export class SessionKeeper {
  private askPassword: (() => Promise<void>) | undefined;
  private asking: Promise<void> | undefined;

  /** Says what to do when the session has ended for good: settles once the person has signed in again, rejects when they would not. */
  whenEnded(ask: () => Promise<void>): void {
    this.askPassword = ask;
  }

  /** Whether this browser has begun a session that it has not ended. */
  get begun(): boolean {
    return localStorage.getItem(RENEWED_AT) !== null;
  }

  begin(): void {
    localStorage.setItem(RENEWED_AT, String(Date.now()));
  }

  end(): void {
    localStorage.removeItem(RENEWED_AT);
  }

  /** Renews before a call what would have expired, so that no call is refused for its age. */
  async renewWhenDue(renew: () => Promise<unknown>): Promise<void> {
    if (this.begun && Date.now() - renewedAtMs() > RENEW_AFTER_MS) await this.renewAfter(renewedAtMs() + 1, renew);
  }

  /**
   * Renews the session unless that was done since, in this tab or another.
   *
   * @param sinceMs when the session was last known to be too old
   * @throws ApiProblem 401 when it has ended and nobody signs in again
   */
  async renewAfter(sinceMs: number, renew: () => Promise<unknown>): Promise<void> {
    try {
      await navigator.locks.request(LOCK, async () => {
        if (renewedAtMs() >= sinceMs) return;
        await renew();
        this.begin();
      });
    } catch (fault) {
      if (!(fault instanceof ApiProblem) || fault.status !== 401) throw fault;
      if (!this.askPassword) throw fault;
      this.asking ??= this.askPassword().finally(() => (this.asking = undefined));
      await this.asking;
    }
  }
}

const renewedAtMs = (): number => Number(localStorage.getItem(RENEWED_AT) ?? 0);
