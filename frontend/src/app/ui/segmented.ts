import { ChangeDetectionStrategy, Component, input, model } from '@angular/core';

/** A choice of a few words side by side, one of them always made. */
@Component({
  selector: 'sw-segmented',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <div role="group" [attr.aria-label]="label()">
      @for (option of options(); track option.value) {
        <button type="button" [attr.aria-pressed]="option.value === value()" (click)="value.set(option.value)">{{ option.word }}</button>
      }
    </div>
  `,
  styles: `
    div {
      display: grid;
      grid-auto-flow: column;
      grid-auto-columns: 1fr;
      border: 1px solid var(--ink-3);
      border-radius: var(--radius);
      overflow: hidden;
      background: var(--page);
    }
    button {
      min-height: 36px;
      padding: 0 14px;
      border: 0;
      border-left: 1px solid var(--ink-3);
      background: none;
      color: inherit;
      font: 560 13px var(--sans);
      cursor: pointer;
    }
    button:first-child {
      border: 0;
    }
    button[aria-pressed='true'] {
      background: var(--ink);
      color: var(--on-ink);
    }
    button:focus-visible {
      outline-offset: -4px;
    }
    button[aria-pressed='true']:focus-visible {
      outline-color: var(--on-ink);
    }
  `,
})
export class Segmented<T extends string> {
  readonly label = input.required<string>();
  readonly options = input.required<readonly { readonly value: T; readonly word: string }[]>();
  readonly value = model.required<T>();
}
