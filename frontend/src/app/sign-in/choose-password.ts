import { Location } from '@angular/common';
import { afterNextRender, ChangeDetectionStrategy, Component, computed, inject, input } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { ActivatedRoute, Router, RouterLink } from '@angular/router';
import { LEAST_PASSWORD_CHARACTERS, mailedToken, newPassword } from '#shared/contract/people';
import { SESSION_ROUTES } from '#shared/contract/people-routes';
import { ApiClient } from '../api/api-client';
import { SessionStore } from '../session/session-store';
import { Field } from '../ui/field';
import { PasswordBox } from '../ui/password-box';
import { Sending } from '../ui/sending';
import { ToastStore } from '../ui/toasts';
import { zodValidator } from '../ui/zod-validator';
import { Side } from './side';

const WORDS = {
  invitation: { heading: 'Welcome', lead: 'Choose a password, and your account is ready.', route: SESSION_ROUTES.acceptInvitation },
  reset: { heading: 'A new password', lead: 'With it you are signed out everywhere else.', route: SESSION_ROUTES.useReset },
} as const;

/** Where a mailed link leads: its token chooses a password once. The token leaves the address at once and is kept nowhere else. */
@Component({
  selector: 'sw-choose-password',
  imports: [Field, PasswordBox, ReactiveFormsModule, RouterLink, Side],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <sw-side>
      <h1>{{ words().heading }}</h1>
      @if (token === '') {
        <p class="lead">The link of the mail is not whole, or this page was loaded again. Open the link as it stands in the mail.</p>
      } @else {
        <p class="lead">{{ words().lead }}</p>
        <form [formGroup]="form" (ngSubmit)="choose()">
          <sw-field label="New password" [of]="form.controls.password" [hint]="hint">
            <sw-password-box [control]="form.controls.password" autocomplete="new-password" />
          </sw-field>
          @if (sending.fault()) {
            <p class="fault" role="alert">{{ sending.fault() }}</p>
          }
          <button class="btn primary tall" type="submit" [disabled]="sending.busy()">Choose this password</button>
        </form>
      }
      <div class="alt">
        <p><a routerLink="/sign-in">Sign in</a>, or <a routerLink="/forgotten-password">ask for another link</a>.</p>
      </div>
    </sw-side>
  `,
  styleUrl: './form-page.scss',
})
export class ChoosePassword {
  private readonly api = inject(ApiClient);
  private readonly session = inject(SessionStore);
  private readonly router = inject(Router);
  private readonly toasts = inject(ToastStore);

  /** What the link is for, from the route. */
  readonly purpose = input.required<'invitation' | 'reset'>();
  protected readonly words = computed(() => WORDS[this.purpose()]);
  protected readonly hint = `At least ${LEAST_PASSWORD_CHARACTERS} characters of any kind: a sentence is good, a common password is refused.`;
  protected readonly token: string;
  protected readonly form = new FormGroup({
    password: new FormControl('', { nonNullable: true, validators: zodValidator(newPassword()) }),
  });
  protected readonly sending = new Sending(this.form);

  constructor() {
    const location = inject(Location);
    const { fragment } = inject(ActivatedRoute).snapshot;
    this.token = mailedToken().safeParse(fragment).success ? (fragment ?? '') : '';
    afterNextRender(() => location.replaceState(location.path()));
  }

  protected async choose(): Promise<void> {
    const { password } = this.form.getRawValue();
    const chosen = await this.sending.send(() => this.api.call(this.words().route, { body: { token: this.token, password } }));
    if (!chosen) return;
    this.session.forget();
    this.toasts.say('Password chosen. Sign in with it.');
    await this.router.navigateByUrl('/sign-in');
  }
}
