import { ChangeDetectionStrategy, Component, input, signal } from '@angular/core';
import { type FormControl, ReactiveFormsModule } from '@angular/forms';
import { Icon } from './icon';

/** A box for a password, which can be shown while it is typed. */
@Component({
  selector: 'sw-password-box',
  imports: [Icon, ReactiveFormsModule],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <input class="box" [type]="shown() ? 'text' : 'password'" [formControl]="control()" [attr.autocomplete]="autocomplete()" />
    <button class="quiet" type="button" [attr.aria-pressed]="shown()" aria-label="Show the password" (click)="shown.set(!shown())">
      <sw-icon [name]="shown() ? 'visibility-off' : 'visibility'" />
    </button>
  `,
  styles: `
    :host {
      position: relative;
      display: block;
    }
    .box {
      padding-right: 44px;
    }
    button {
      position: absolute;
      top: 3px;
      right: 4px;
    }
  `,
})
export class PasswordBox {
  readonly control = input.required<FormControl<string>>();
  readonly autocomplete = input.required<'current-password' | 'new-password'>();
  protected readonly shown = signal(false);
}
