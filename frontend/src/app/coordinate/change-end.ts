import { ChangeDetectionStrategy, Component, inject, input, linkedSignal, type OnInit, output } from '@angular/core';
import { FormGroup, ReactiveFormsModule } from '@angular/forms';
import { type RoleHeld } from '#shared/contract/people';
import { PEOPLE_ROUTES } from '#shared/contract/people-routes';
import { ApiClient } from '../api/api-client';
import { textControl } from '../ui/controls';
import { Field } from '../ui/field';
import { Meanwhile } from '../ui/meanwhile';
import { MeanwhileNote } from '../ui/meanwhile-note';
import { Sending } from '../ui/sending';
import { endOf, roleEnd, typedEnd } from './role-end';

/** The form that says until when a role is held. */
@Component({
  selector: 'sw-change-end',
  imports: [Field, MeanwhileNote, ReactiveFormsModule],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <form [formGroup]="form" (ngSubmit)="send()">
      <sw-field label="Held until, UTC" [of]="form.controls.end" hint="empty: until it is taken away"
        ><input class="box figure" type="datetime-local" formControlName="end"
      /></sw-field>
      <sw-meanwhile [of]="meanwhile.differences()" />
      @if (sending.fault()) {
        <p class="fault" role="alert">{{ sending.fault() }}</p>
      }
      <div class="acts">
        <button class="btn primary" type="submit" [disabled]="sending.busy()">Say until when</button>
        <button class="btn plain" type="button" (click)="closed.emit()">Cancel</button>
      </div>
    </form>
  `,
  styles: `
    form {
      display: grid;
      gap: 12px;
      max-width: 320px;
      padding: 4px 0 12px;
    }
  `,
})
export class ChangeEnd implements OnInit {
  private readonly api = inject(ApiClient);
  readonly personId = input.required<number>();
  readonly role = input.required<RoleHeld>();
  readonly told = output<RoleHeld>();
  readonly closed = output();
  private readonly seen = linkedSignal(() => this.role());
  protected readonly form = new FormGroup({ end: textControl(roleEnd()) });
  protected readonly sending = new Sending(this.form);
  protected readonly meanwhile = new Meanwhile<RoleHeld>(
    async () => {
      const person = await this.api.call(PEOPLE_ROUTES.readPerson, { params: { personId: this.personId() } });
      return person.roles.find(({ id }) => id === this.role().id) ?? this.seen();
    },
    ({ expiresAt }) => ({ 'Held until': expiresAt ?? 'it is taken away' }),
  );

  ngOnInit(): void {
    this.form.setValue({ end: typedEnd(this.role().expiresAt) });
  }

  protected send(): Promise<boolean> {
    const seen = this.seen();
    const body = { expiresAt: endOf(this.form.getRawValue().end), version: seen.version };
    return this.sending.send(async () => {
      const change = () => this.api.call(PEOPLE_ROUTES.changeRole, { params: { roleId: seen.id }, body });
      this.told.emit(await this.meanwhile.around(seen, change, (fresh) => this.seen.set(fresh)));
    });
  }
}
