import { DialogRef } from '@angular/cdk/dialog';
import { ChangeDetectionStrategy, Component, inject, Injectable } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { Router } from '@angular/router';
import { givenPassword } from '#shared/contract/people';
import { ApiProblem } from '../api/api-problem';
import { SessionKeeper } from '../api/session-keeper';
import { Field } from '../ui/field';
import { OpenDialog } from '../ui/open-dialog';
import { PasswordBox } from '../ui/password-box';
import { Sending } from '../ui/sending';
import { zodValidator } from '../ui/zod-validator';
import { SessionStore } from './session-store';

const ENDED = 'The session has ended: sign in again.';

/** Asks for the password where a session ended, so that the page and what was typed into it stay. */
@Injectable({ providedIn: 'root' })
export class AskPassword {
  private readonly dialog = inject(OpenDialog);
  private readonly keeper = inject(SessionKeeper);
  private readonly session = inject(SessionStore);
  private readonly router = inject(Router);

  /** From here on an ended session asks. */
  whenSessionEnds(): void {
    this.keeper.whenEnded(() => this.ask());
  }

  private async ask(): Promise<void> {
    if (!this.session.me()) throw new ApiProblem({ status: 401, text: ENDED });
    const options = { disableClose: true, ariaLabelledBy: 'password-heading' };
    if (await this.dialog.open<boolean>(PasswordQuestion, options)) return;
    this.session.forget();
    await this.router.navigateByUrl('/sign-in');
    throw new ApiProblem({ status: 401, text: ENDED });
  }
}

@Component({
  selector: 'sw-password-question',
  imports: [Field, PasswordBox, ReactiveFormsModule],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <form class="dialog" [formGroup]="form" (ngSubmit)="signIn()">
      <h2 id="password-heading">Your session has ended</h2>
      <p>Sign in again as {{ session.me()?.email }}. What you typed stays.</p>
      <sw-field label="Password" [of]="form.controls.password"
        ><sw-password-box [control]="form.controls.password" autocomplete="current-password"
      /></sw-field>
      @if (sending.fault()) {
        <p class="fault" role="alert">{{ sending.fault() }}</p>
      }
      <div class="acts">
        <button class="btn primary" type="submit" [disabled]="sending.busy()">Sign in</button>
        <button class="btn plain" type="button" (click)="ref.close(false)">Leave this page</button>
      </div>
    </form>
  `,
})
class PasswordQuestion {
  protected readonly session = inject(SessionStore);
  protected readonly ref = inject<DialogRef<boolean>>(DialogRef);
  protected readonly form = new FormGroup({
    password: new FormControl('', { nonNullable: true, validators: zodValidator(givenPassword()) }),
  });
  protected readonly sending = new Sending(this.form);

  protected async signIn(): Promise<void> {
    const { password } = this.form.getRawValue();
    if (await this.sending.send(() => this.session.signIn(this.session.me()?.email ?? '', password))) this.ref.close(true);
  }
}
