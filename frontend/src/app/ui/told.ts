import { ChangeDetectionStrategy, Component, input, output } from '@angular/core';
import { Icon } from './icon';

/** What the server said of something that it took: what it does, and what can be right and seldom is. It stands until it is put away. */
@Component({
  selector: 'sw-told',
  imports: [Icon],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <div role="status">
      @if (effects().length + warnings().length > 0) {
        <div class="told">
          <ul>
            @for (text of effects(); track $index) {
              <li>{{ text }}</li>
            }
            @for (warning of warnings(); track $index) {
              <li><sw-icon name="warning" /><span class="visually-hidden">Doubtful: </span>{{ warning.text }}</li>
            }
          </ul>
          <button class="btn" type="button" (click)="away.emit()">Put away</button>
        </div>
      }
    </div>
  `,
  styles: `
    .told {
      display: flex;
      flex-wrap: wrap;
      gap: 10px 16px;
      align-items: start;
      justify-content: space-between;
      margin: 10px 0 16px;
      padding: 10px 13px;
      border: 1px solid var(--rule);
      border-left: 3px solid var(--ink);
      background: var(--sheet);
      font-size: 13.5px;
    }
    ul {
      flex: 1 1 240px;
    }
    li {
      display: flex;
      gap: 8px;
      padding: 2px 0;
    }
    sw-icon {
      width: 18px;
      height: 18px;
    }
  `,
})
export class Told {
  readonly effects = input<readonly string[]>([]);
  readonly warnings = input<readonly { readonly text: string }[]>([]);
  readonly away = output();
}
