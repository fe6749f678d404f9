import { ChangeDetectionStrategy, Component, inject, input, output, signal } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { code } from '#shared/contract/leaves';
import { type Rule, RULE_ROUTES } from '#shared/contract/rule-routes';
import { between, nameOrEmpty, wholeNumber } from '#shared/contract/setup-leaves';
import { ApiClient } from '../api/api-client';
import { Field } from '../ui/field';
import { numberIn, numberTyped } from '../ui/number-typed';
import { Segmented } from '../ui/segmented';
import { Sending } from '../ui/sending';
import { zodValidator } from '../ui/zod-validator';

/** The form that states a coincidence rule. */
@Component({
  selector: 'sw-make-rule',
  imports: [Field, ReactiveFormsModule, Segmented],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <section class="sheet" aria-labelledby="make-rule-heading">
      <h2 id="make-rule-heading">State a rule</h2>
      <p class="note">Triggers of different sites that are near by it form coincidences. It finds once it is active.</p>
      <form [formGroup]="form" (ngSubmit)="make()">
        <sw-field label="Code" [of]="form.controls.code"><input class="box figure" formControlName="code" /></sw-field>
        <sw-field label="Name" [of]="form.controls.name"><input class="box" formControlName="name" /></sw-field>
        <sw-segmented label="Near when within" [options]="kinds" [(value)]="kind" />
        @if (kind() === 'light-time') {
          <sw-field label="More than light-time and error, ns" [of]="form.controls.marginNs">
            <input class="box figure" formControlName="marginNs" inputmode="decimal" />
          </sw-field>
        } @else {
          <sw-field label="Width in the geocentric frame, ns" [of]="form.controls.widthNs">
            <input class="box figure" formControlName="widthNs" inputmode="decimal" />
          </sw-field>
        }
        <sw-field label="Least number of sites" [of]="form.controls.minimumFold">
          <input class="box figure" formControlName="minimumFold" inputmode="numeric" />
        </sw-field>
        <sw-field label="Standard errors that decide" [of]="form.controls.sigmas">
          <input class="box figure" formControlName="sigmas" inputmode="decimal" />
        </sw-field>
        @if (sending.fault()) {
          <p class="fault" role="alert">{{ sending.fault() }}</p>
        }
        <div class="acts">
          <button class="btn primary" type="submit" [disabled]="sending.busy()">State the rule</button>
          <ng-content />
        </div>
      </form>
    </section>
  `,
})
export class MakeRule {
  private readonly api = inject(ApiClient);
  readonly networkId = input.required<number>();
  readonly made = output<Rule>();
  protected readonly kinds = [
    { value: 'light-time', word: 'Light-time and error' },
    { value: 'fixed', word: 'A fixed width' },
  ] as const;
  protected readonly kind = signal<'light-time' | 'fixed'>('light-time');
  protected readonly form = new FormGroup({
    code: new FormControl('', { nonNullable: true, validators: zodValidator(code()) }),
    name: new FormControl('', { nonNullable: true, validators: zodValidator(nameOrEmpty()) }),
    marginNs: new FormControl('0', { nonNullable: true, validators: zodValidator(between(0, 1e11, 'nanoseconds'), numberTyped) }),
    widthNs: new FormControl('50000000', { nonNullable: true, validators: zodValidator(between(0, 1e11, 'nanoseconds'), numberTyped) }),
    minimumFold: new FormControl('2', { nonNullable: true, validators: zodValidator(wholeNumber(2, 200), numberTyped) }),
    sigmas: new FormControl('3', { nonNullable: true, validators: zodValidator(between(0, 100, 'standard errors'), numberTyped) }),
  });
  protected readonly sending = new Sending(this.form);

  protected make(): Promise<boolean> {
    const given = this.form.getRawValue();
    const window =
      this.kind() === 'fixed'
        ? ({ kind: 'fixed', widthNs: numberIn(given.widthNs) } as const)
        : ({ kind: 'light-time', marginNs: numberIn(given.marginNs) } as const);
    const state = { window, minimumFold: numberIn(given.minimumFold), sigmas: numberIn(given.sigmas) };
    return this.sending.send(async () => {
      const params = { networkId: this.networkId() };
      const body = { code: given.code, name: given.name, state };
      const rule = await this.api.call(RULE_ROUTES.makeRule, { params, body });
      this.made.emit(rule);
    });
  }
}
