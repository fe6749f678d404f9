import { ChangeDetectionStrategy, Component, inject, signal } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { RouterLink } from '@angular/router';
import { email } from '#shared/contract/people';
import { SESSION_ROUTES } from '#shared/contract/people-routes';
import { ApiClient } from '../api/api-client';
import { Field } from '../ui/field';
import { Sending } from '../ui/sending';
import { zodValidator } from '../ui/zod-validator';
import { Side } from './side';

/** Where someone asks for a link to choose a new password by. The answer does not tell whether there is such an account. */
@Component({
  selector: 'sw-forgotten-password',
  imports: [Field, ReactiveFormsModule, RouterLink, Side],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <sw-side>
      @if (askedFor(); as address) {
        <h1>Look into your mail</h1>
        <p class="lead" role="status">
          If {{ address }} has an account here, a link is on its way to it. It works once, for 30 minutes. Nothing came? Ask again, or ask a
          coordinator.
        </p>
      } @else {
        <h1>A new password</h1>
        <p class="lead">A link comes by mail. It works once, for 30 minutes.</p>
        <form [formGroup]="form" (ngSubmit)="ask()">
          <sw-field label="Email" [of]="form.controls.email">
            <input class="box" type="email" autocomplete="username" formControlName="email" />
          </sw-field>
          @if (sending.fault()) {
            <p class="fault" role="alert">{{ sending.fault() }}</p>
          }
          <button class="btn primary tall" type="submit" [disabled]="sending.busy()">Send the link</button>
        </form>
      }
      <div class="alt">
        <p><a routerLink="/sign-in">Back to sign in</a></p>
      </div>
    </sw-side>
  `,
  styleUrl: './form-page.scss',
})
export class ForgottenPassword {
  private readonly api = inject(ApiClient);
  protected readonly form = new FormGroup({ email: new FormControl('', { nonNullable: true, validators: zodValidator(email()) }) });
  protected readonly sending = new Sending(this.form);
  protected readonly askedFor = signal('');

  protected async ask(): Promise<void> {
    const body = this.form.getRawValue();
    if (await this.sending.send(() => this.api.call(SESSION_ROUTES.askReset, { body }))) this.askedFor.set(body.email.trim());
  }
}
