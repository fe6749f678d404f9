import { ChangeDetectionStrategy, Component, inject, output } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { email, type Person, personName } from '#shared/contract/people';
import { PEOPLE_ROUTES } from '#shared/contract/people-routes';
import { ApiClient } from '../api/api-client';
import { Field } from '../ui/field';
import { Sending } from '../ui/sending';
import { zodValidator } from '../ui/zod-validator';
import { RoleChoice, roleForm, roleOf } from './role-choice';

/** The form that invites someone: a mail goes out with a link that works once, for 72 hours. */
@Component({
  selector: 'sw-invite-person',
  imports: [Field, ReactiveFormsModule, RoleChoice],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <section class="sheet" aria-labelledby="invite-heading">
      <h2 id="invite-heading">Invite someone</h2>
      <p class="note">They get a link by mail, good for 72 hours and once, and choose their own password.</p>
      <form [formGroup]="form" (ngSubmit)="invite()">
        <div class="two">
          <sw-field label="Email" [of]="form.controls.email"><input class="box" type="email" formControlName="email" /></sw-field>
          <sw-field label="Name" [of]="form.controls.name"><input class="box" formControlName="name" /></sw-field>
        </div>
        <sw-role-choice [form]="form.controls.role" />
        @if (sending.fault()) {
          <p class="fault" role="alert">{{ sending.fault() }}</p>
        }
        <div class="acts">
          <button class="btn primary" type="submit" [disabled]="sending.busy()">Send the invitation</button>
          <button class="btn plain" type="button" (click)="closed.emit()">Cancel</button>
        </div>
      </form>
    </section>
  `,
  styles: `
    .two {
      display: grid;
      grid-template-columns: repeat(auto-fit, minmax(220px, 1fr));
      gap: 14px;
    }
  `,
})
export class InvitePerson {
  private readonly api = inject(ApiClient);
  readonly invited = output<Person>();
  readonly closed = output();
  protected readonly form = new FormGroup({
    email: new FormControl('', { nonNullable: true, validators: zodValidator(email()) }),
    name: new FormControl('', { nonNullable: true, validators: zodValidator(personName()) }),
    role: roleForm(0),
  });
  protected readonly sending = new Sending(this.form);

  protected async invite(): Promise<void> {
    const { email: address, name } = this.form.getRawValue();
    const role = roleOf(this.form.controls.role);
    await this.sending.send(async () => {
      this.invited.emit(await this.api.call(PEOPLE_ROUTES.invite, { body: { email: address, name, role } }));
    });
  }
}
