import { ChangeDetectionStrategy, Component, inject, input, output } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { code } from '#shared/contract/leaves';
import { type Run, RUN_ROUTES } from '#shared/contract/network-routes';
import { nameOrEmpty, timeGiven } from '#shared/contract/setup-leaves';
import { ApiClient } from '../api/api-client';
import { Field } from '../ui/field';
import { Sending } from '../ui/sending';
import { zodValidator } from '../ui/zod-validator';

/** The form that begins a data-taking run. */
@Component({
  selector: 'sw-make-run',
  imports: [Field, ReactiveFormsModule],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <section class="sheet" aria-labelledby="make-run-heading">
      <h2 id="make-run-heading">Begin a run</h2>
      <p class="note">Runs of a network do not overlap. This one goes on until it is ended.</p>
      <form [formGroup]="form" (ngSubmit)="make()">
        <sw-field label="Code" [of]="form.controls.code"><input class="box figure" formControlName="code" /></sw-field>
        <sw-field label="Name" [of]="form.controls.name"><input class="box" formControlName="name" /></sw-field>
        <sw-field label="From" [of]="form.controls.from" hint="such as 2027-03-01T00:00:00 UTC">
          <input class="box figure" formControlName="from" />
        </sw-field>
        @if (sending.fault()) {
          <p class="fault" role="alert">{{ sending.fault() }}</p>
        }
        <div class="acts">
          <button class="btn primary" type="submit" [disabled]="sending.busy()">Begin the run</button>
          <ng-content />
        </div>
      </form>
    </section>
  `,
})
export class MakeRun {
  private readonly api = inject(ApiClient);
  readonly networkId = input.required<number>();
  readonly made = output<Run>();
  protected readonly form = new FormGroup({
    code: new FormControl('', { nonNullable: true, validators: zodValidator(code()) }),
    name: new FormControl('', { nonNullable: true, validators: zodValidator(nameOrEmpty()) }),
    from: new FormControl('', { nonNullable: true, validators: zodValidator(timeGiven()) }),
  });
  protected readonly sending = new Sending(this.form);

  protected make(): Promise<boolean> {
    return this.sending.send(async () => {
      const body = this.form.getRawValue();
      const run = await this.api.call(RUN_ROUTES.makeRun, { params: { networkId: this.networkId() }, body });
      this.made.emit(run);
    });
  }
}
