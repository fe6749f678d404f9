import { afterRenderEffect, ChangeDetectionStrategy, Component, computed, ElementRef, inject, input } from '@angular/core';
import { toObservable, toSignal } from '@angular/core/rxjs-interop';
import { type AbstractControl } from '@angular/forms';
import { switchMap } from 'rxjs';
import { Term } from '../terms/term';
import { type TermName } from '../terms/terms';
import { Icon } from './icon';

let lastId = 0;

/** A control with its label, a hint, and the sentence of what would be right. The control's own element is put inside. */
@Component({
  selector: 'sw-field',
  imports: [Icon, Term],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <div class="name">
      <label [attr.for]="id">{{ label() }}</label>
      @if (term(); as word) {
        <sw-term [of]="word" />
      }
    </div>
    <ng-content />
    @if (fault(); as text) {
      <p class="fault" [id]="id + '-note'"><sw-icon name="error" />{{ text }}</p>
    } @else if (hint()) {
      <p class="hint" [id]="id + '-note'">{{ hint() }}</p>
    }
  `,
  styleUrl: './field.scss',
})
export class Field {
  readonly label = input.required<string>();
  readonly of = input.required<AbstractControl>();
  readonly hint = input('');
  /** The word of the label whose definition a `?` opens. */
  readonly term = input<TermName | undefined>();
  protected readonly id = `field-${++lastId}`;

  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef);
  private readonly events = toSignal(toObservable(this.of).pipe(switchMap(({ events }) => events)));

  /** What is wrong, once the field was left or the form was sent. */
  protected readonly fault = computed(() => {
    this.events();
    const control = this.of();
    if (!control.invalid || !control.touched) return '';
    const error: unknown = Object.values(control.errors ?? {})[0];
    return typeof error === 'string' ? error : 'This cannot be used.';
  });

  constructor() {
    afterRenderEffect(() => {
      const noted = this.fault() !== '' || this.hint() !== '';
      const wrong = String(this.fault() !== '');
      const box = this.host.nativeElement.querySelector('input, select, textarea');
      if (!box) return;
      box.id = this.id;
      box.setAttribute('aria-invalid', wrong);
      if (noted) box.setAttribute('aria-describedby', `${this.id}-note`);
      else box.removeAttribute('aria-describedby');
    });
  }
}
