import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { givenPassword, LEAST_PASSWORD_CHARACTERS, newPassword } from '#shared/contract/people';
import { MY_ROUTES } from '#shared/contract/people-routes';
import { ApiClient } from '../api/api-client';
import { Field } from '../ui/field';
import { PasswordBox } from '../ui/password-box';
import { Sending } from '../ui/sending';
import { ToastStore } from '../ui/toasts';
import { zodValidator } from '../ui/zod-validator';

/** Where someone who knows their password chooses another. */
@Component({
  selector: 'sw-my-password',
  imports: [Field, PasswordBox, ReactiveFormsModule],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <form [formGroup]="form" (ngSubmit)="save()">
      <sw-field label="Password now" [of]="form.controls.current">
        <sw-password-box [control]="form.controls.current" autocomplete="current-password" />
      </sw-field>
      <sw-field label="New password" [of]="form.controls.password" [hint]="hint">
        <sw-password-box [control]="form.controls.password" autocomplete="new-password" />
      </sw-field>
      @if (sending.fault()) {
        <p class="fault" role="alert">{{ sending.fault() }}</p>
      }
      <div class="acts"><button class="btn" type="submit" [disabled]="sending.busy()">Change the password</button></div>
    </form>
  `,
  styles: `
    form {
      display: grid;
      gap: 14px;
      margin-top: 14px;
    }
  `,
})
export class MyPassword {
  private readonly api = inject(ApiClient);
  private readonly toasts = inject(ToastStore);
  protected readonly hint = `At least ${LEAST_PASSWORD_CHARACTERS} characters. All your other sessions end.`;
  protected readonly form = new FormGroup({
    current: new FormControl('', { nonNullable: true, validators: zodValidator(givenPassword()) }),
    password: new FormControl('', { nonNullable: true, validators: zodValidator(newPassword()) }),
  });
  protected readonly sending = new Sending(this.form);

  protected async save(): Promise<void> {
    const body = this.form.getRawValue();
    if (!(await this.sending.send(() => this.api.call(MY_ROUTES.changeMyPassword, { body })))) return;
    this.form.reset();
    this.toasts.say('Password changed. All your other sessions have ended.');
  }
}
