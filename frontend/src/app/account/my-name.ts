import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { personName } from '#shared/contract/people';
import { MY_ROUTES } from '#shared/contract/people-routes';
import { ApiClient } from '../api/api-client';
import { SessionStore } from '../session/session-store';
import { Field } from '../ui/field';
import { Sending } from '../ui/sending';
import { ToastStore } from '../ui/toasts';
import { zodValidator } from '../ui/zod-validator';

/** The name by which others see someone. */
@Component({
  selector: 'sw-my-name',
  imports: [Field, ReactiveFormsModule],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <form [formGroup]="form" (ngSubmit)="save()">
      <sw-field label="Your name" [of]="form.controls.name" hint="As it stands beside what you sign and change.">
        <input class="box" formControlName="name" autocomplete="name" />
      </sw-field>
      @if (sending.fault()) {
        <p class="fault" role="alert">{{ sending.fault() }}</p>
      }
      <div class="acts"><button class="btn" type="submit" [disabled]="sending.busy()">Save the name</button></div>
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
export class MyName {
  private readonly api = inject(ApiClient);
  private readonly session = inject(SessionStore);
  private readonly toasts = inject(ToastStore);
  protected readonly form = new FormGroup({
    name: new FormControl(this.session.me()?.name ?? '', { nonNullable: true, validators: zodValidator(personName()) }),
  });
  protected readonly sending = new Sending(this.form);

  protected async save(): Promise<void> {
    const me = this.session.me();
    if (!me) return;
    const body = { ...this.form.getRawValue(), version: me.version };
    const saved = await this.sending.send(async () => this.session.take(await this.api.call(MY_ROUTES.changeMe, { body })));
    if (saved) this.toasts.say('Name saved.');
  }
}
