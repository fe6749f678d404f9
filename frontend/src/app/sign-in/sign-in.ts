import { ChangeDetectionStrategy, Component, inject, input } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { Router, RouterLink } from '@angular/router';
import { email, givenPassword } from '#shared/contract/people';
import { SessionStore } from '../session/session-store';
import { Field } from '../ui/field';
import { PasswordBox } from '../ui/password-box';
import { Sending } from '../ui/sending';
import { zodValidator } from '../ui/zod-validator';
import { Side } from './side';

/** Where someone signs in, and goes on to where they wanted to be. */
@Component({
  selector: 'sw-sign-in',
  imports: [Field, PasswordBox, ReactiveFormsModule, RouterLink, Side],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <sw-side>
      <h1>Sign in</h1>
      <p class="lead">{{ to() ? 'Then the page that you asked for opens.' : 'With the address that you were invited by.' }}</p>
      <form [formGroup]="form" (ngSubmit)="signIn()">
        <sw-field label="Email" [of]="form.controls.email">
          <input class="box" type="email" autocomplete="username" formControlName="email" />
        </sw-field>
        <sw-field label="Password" [of]="form.controls.password">
          <sw-password-box [control]="form.controls.password" autocomplete="current-password" />
        </sw-field>
        @if (sending.fault()) {
          <p class="fault" role="alert">{{ sending.fault() }}</p>
        }
        <button class="btn primary tall" type="submit" [disabled]="sending.busy()">Sign in</button>
      </form>
      <div class="alt">
        <p>Forgot it? <a routerLink="/forgotten-password">Ask for a link</a> by which you choose a new one.</p>
        <p>No account? A coordinator of your network invites you.</p>
      </div>
    </sw-side>
  `,
  styleUrl: './form-page.scss',
})
export class SignIn {
  private readonly session = inject(SessionStore);
  private readonly router = inject(Router);

  /** The address to go on to, from the query; only one of this application is followed. */
  readonly to = input<string>();

  protected readonly form = new FormGroup({
    email: new FormControl('', { nonNullable: true, validators: zodValidator(email()) }),
    password: new FormControl('', { nonNullable: true, validators: zodValidator(givenPassword()) }),
  });
  protected readonly sending = new Sending(this.form);

  protected async signIn(): Promise<void> {
    const { email: address, password } = this.form.getRawValue();
    const signedIn = await this.sending.send(() => this.session.signIn(address, password));
    if (signedIn) await this.router.navigateByUrl(ownAddress(this.to()), { replaceUrl: true });
  }
}

/** An address of this application, never one of another host. */
const ownAddress = (to: string | undefined): string => (to !== undefined && /^\/(?![/\\])/.test(to) ? to : '/');
