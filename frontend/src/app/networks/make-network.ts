import { ChangeDetectionStrategy, Component, inject, output } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { code } from '#shared/contract/leaves';
import { type Network, NETWORK_ROUTES } from '#shared/contract/network-routes';
import { setupName, timeGiven } from '#shared/contract/setup-leaves';
import { ApiClient } from '../api/api-client';
import { instantText } from '../instants/instant-parts';
import { deviceInstant } from '../instants/server-instant';
import { Field } from '../ui/field';
import { Sending } from '../ui/sending';
import { zodValidator } from '../ui/zod-validator';
import { NetworkStore } from './network-store';

/** The form that makes a network. */
@Component({
  selector: 'sw-make-network',
  imports: [Field, ReactiveFormsModule],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <section class="sheet" aria-labelledby="make-network-heading">
      <h2 id="make-network-heading">Name the network</h2>
      <p class="note">Code and origin are for good. At the origin, with the geocentre, all frames agree that it is zero.</p>
      <form [formGroup]="form" (ngSubmit)="make()">
        <sw-field label="Name" [of]="form.controls.name"><input class="box" formControlName="name" /></sw-field>
        <sw-field label="Code" [of]="form.controls.code" hint="1 to 24 letters, digits, _ or -">
          <input class="box figure" formControlName="code" />
        </sw-field>
        <sw-field label="Origin of its frames" [of]="form.controls.origin" hint="such as 2027-03-01T00:00:00 TAI, near your first data">
          <input class="box figure" formControlName="origin" />
        </sw-field>
        @if (sending.fault()) {
          <p class="fault" role="alert">{{ sending.fault() }}</p>
        }
        <div class="acts">
          <button class="btn primary" type="submit" [disabled]="sending.busy()">Make the network</button>
          <ng-content />
        </div>
      </form>
    </section>
  `,
})
export class MakeNetwork {
  private readonly api = inject(ApiClient);
  private readonly networks = inject(NetworkStore);
  readonly made = output<Network>();
  protected readonly form = new FormGroup({
    name: new FormControl('', { nonNullable: true, validators: zodValidator(setupName()) }),
    code: new FormControl('', { nonNullable: true, validators: zodValidator(code()) }),
    origin: new FormControl(midnight(), { nonNullable: true, validators: zodValidator(timeGiven()) }),
  });
  protected readonly sending = new Sending(this.form);

  protected make(): Promise<boolean> {
    return this.sending.send(async () => {
      const network = await this.api.call(NETWORK_ROUTES.makeNetwork, { body: this.form.getRawValue() });
      await this.networks.networks.load();
      this.networks.choose(network.id);
      this.made.emit(network);
    });
  }
}

/** The beginning of this day, TAI. */
const midnight = (): string => `${instantText(deviceInstant(), 'TAI', 0).slice(0, 10)}T00:00:00 TAI`;
