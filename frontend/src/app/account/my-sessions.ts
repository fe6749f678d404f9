import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { Router } from '@angular/router';
import { browserWords } from '#shared/contract/browser-words';
import { type Session } from '#shared/contract/people';
import { MY_ROUTES } from '#shared/contract/people-routes';
import { ApiClient } from '../api/api-client';
import { sentenceOf } from '../api/api-problem';
import { InstantMark } from '../instants/instant';
import { SessionStore } from '../session/session-store';
import { ConfirmTyped } from '../ui/confirm-typed';
import { Loader } from '../ui/loaded';
import { Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';

/** Where someone is signed in, and how to end that. */
@Component({
  selector: 'sw-my-sessions',
  imports: [Fault, InstantMark, Skeleton],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <h2>Sessions</h2>
    @let state = sessions.state();
    @switch (state.kind) {
      @case ('loading') {
        <sw-skeleton />
      }
      @case ('failed') {
        <sw-fault heading="The sessions could not be loaded." [text]="state.text" [id]="state.id" (again)="sessions.load()" />
      }
      @case ('loaded') {
        <ul>
          @for (session of state.value; track session.id) {
            <li>
              <div>
                <p>
                  <strong>{{ words(session.browser) }}</strong>
                  @if (session.current) {
                    <span class="tag this">this one</span>
                  }
                </p>
                <p class="note">Last used <sw-instant [of]="session.lastUsedAt" />, begun <sw-instant [of]="session.createdAt" /></p>
              </div>
              @if (!session.current) {
                <button class="link" type="button" (click)="end(session)">End</button>
              }
            </li>
          }
        </ul>
        <div class="acts"><button class="btn" type="button" (click)="signOutEverywhere()">Sign out everywhere</button></div>
      }
    }
  `,
  styles: `
    li {
      display: flex;
      gap: 16px;
      align-items: center;
      justify-content: space-between;
      padding: 9px 0;
      border-bottom: 1px solid var(--rule-2);
    }
    strong {
      margin-right: 10px;
      font-weight: 600;
    }
    .acts {
      margin-top: 14px;
    }
  `,
})
export class MySessions {
  private readonly api = inject(ApiClient);
  private readonly confirm = inject(ConfirmTyped);
  private readonly router = inject(Router);
  private readonly session = inject(SessionStore);
  private readonly toasts = inject(ToastStore);
  protected readonly words = browserWords;
  protected readonly sessions = new Loader(async () => (await this.api.call(MY_ROUTES.listMySessions, { query: {} })).items);

  constructor() {
    void this.sessions.load();
  }

  protected async end({ id, browser }: Session): Promise<void> {
    const name = browserWords(browser);
    const meant = await this.confirm.ask({
      heading: `End the session of ${name}`,
      text: 'Who sits there must sign in again, and loses what they have not saved. This cannot be undone.',
      word: 'end',
      act: 'End the session',
    });
    if (!meant) return;
    try {
      await this.api.call(MY_ROUTES.endMySession, { params: { sessionId: id } });
      this.sessions.update((all) => all.filter((one) => one.id !== id));
      this.toasts.say(`Session of ${name} ended.`);
    } catch (fault) {
      this.toasts.fail(sentenceOf(fault));
    }
  }

  protected async signOutEverywhere(): Promise<void> {
    const meant = await this.confirm.ask({
      heading: 'Sign out everywhere',
      text: 'All your sessions end, this one too. This cannot be undone.',
      word: 'sign out',
      act: 'Sign out everywhere',
    });
    if (!meant) return;
    try {
      await this.api.call(MY_ROUTES.signOutEverywhere, {});
      this.session.forget();
      await this.router.navigateByUrl('/sign-in');
    } catch (fault) {
      this.toasts.fail(sentenceOf(fault));
    }
  }
}
