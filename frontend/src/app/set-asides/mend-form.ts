import { ChangeDetectionStrategy, Component, inject, input, type OnInit, output } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import * as z from 'zod';
import { text } from '#shared/contract/leaves';
import { SET_ASIDE_ROUTES, type SetAsideInFull } from '#shared/contract/set-aside-routes';
import { ApiClient } from '../api/api-client';
import { textControl } from '../ui/controls';
import { Field } from '../ui/field';
import { Sending } from '../ui/sending';
import { fieldsOf } from './fields-of';

const MOST = 400;
const field = () => text(`at most ${MOST} characters`).refine((given) => given.length <= MOST, `at most ${MOST} characters`);

/** The form that accepts a record as it should have been. What the site wrote stays beside it for good. */
@Component({
  selector: 'sw-mend-form',
  imports: [Field, ReactiveFormsModule],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <form class="sheet" [formGroup]="form" (ngSubmit)="send()">
      <h2>Mend it</h2>
      <p class="note">What the site wrote stays beside it for good.</p>
      <div class="two">
        <sw-field label="Number" [of]="form.controls.sequence"><input class="box figure" formControlName="sequence" /></sw-field>
        <sw-field label="Series" term="series" [of]="form.controls.series" hint="empty: the one without a name"
          ><input class="box figure" formControlName="series"
        /></sw-field>
        <sw-field label="Reading" term="reading" [of]="form.controls.reading"
          ><input class="box figure" formControlName="reading"
        /></sw-field>
        <sw-field label="It is written as" [of]="form.controls.readingForm"
          ><select class="box" formControlName="readingForm">
            <option value="iso">date and time of day</option>
            <option value="tai-pair">seconds and picoseconds of TAI</option>
          </select></sw-field
        >
        <sw-field label="Its error, ns" term="sigma" [of]="form.controls.sigmaNs" hint="empty: by its last digit, or the site's own"
          ><input class="box figure" formControlName="sigmaNs"
        /></sw-field>
        <sw-field label="Amplitude" [of]="form.controls.amplitude"><input class="box figure" formControlName="amplitude" /></sw-field>
        <sw-field label="Kind" [of]="form.controls.kind"
          ><select class="box" formControlName="kind">
            <option value="trigger">trigger</option>
            <option value="reference">reference pulse</option>
            <option value="test">test</option>
          </select></sw-field
        >
        <sw-field label="Why" [of]="form.controls.why"><input class="box" formControlName="why" /></sw-field>
      </div>
      @if (sending.fault()) {
        <p class="fault" role="alert">{{ sending.fault() }}</p>
      }
      <div class="acts">
        <button class="btn primary" type="submit" [disabled]="sending.busy()">Accept it mended</button>
        <button class="btn plain" type="button" (click)="closed.emit()">Cancel</button>
      </div>
    </form>
  `,
  styles: `
    .sheet {
      display: grid;
      gap: 14px;
    }
  `,
})
export class MendForm implements OnInit {
  private readonly api = inject(ApiClient);
  readonly of = input.required<SetAsideInFull>();
  readonly told = output<SetAsideInFull>();
  readonly closed = output();
  protected readonly form = new FormGroup({
    sequence: textControl(field().refine((given) => given.trim() !== '', 'a whole number')),
    series: textControl(field()),
    reading: textControl(field().refine((given) => given.trim() !== '', 'a reading as the site writes them')),
    readingForm: new FormControl<'iso' | 'tai-pair'>('iso', { nonNullable: true }),
    sigmaNs: textControl(field()),
    amplitude: textControl(field()),
    kind: new FormControl('trigger', { nonNullable: true }),
    why: textControl(z.string().trim().min(1, 'why it is so')),
  });
  protected readonly sending = new Sending(this.form);

  ngOnInit(): void {
    this.form.patchValue(fieldsOf(this.of()));
  }

  protected send(): Promise<boolean> {
    const { id: setAsideId, version } = this.of();
    const { why, ...record } = this.form.getRawValue();
    return this.sending.send(async () => {
      const body = { version, why, record };
      this.told.emit(await this.api.call(SET_ASIDE_ROUTES.acceptSetAside, { params: { setAsideId }, body }));
    });
  }
}
