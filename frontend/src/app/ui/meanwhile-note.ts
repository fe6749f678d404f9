import { ChangeDetectionStrategy, Component, input } from '@angular/core';
import { type Difference } from './meanwhile';

/** What someone else changed while a form was filled in. */
@Component({
  selector: 'sw-meanwhile',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    @if (of(); as found) {
      <div role="status">
        <p><strong>Changed meanwhile.</strong> What you typed is kept: send it again to put it over this.</p>
        <ul>
          @for (one of found; track one.name) {
            <li>
              {{ one.name }}: <span class="now">{{ one.now }}</span> <span class="was">was {{ one.was }}</span>
            </li>
          } @empty {
            <li>Nothing that stands in this form.</li>
          }
        </ul>
      </div>
    }
  `,
  styles: `
    div {
      padding: 10px 13px;
      border-left: 3px solid var(--ink);
      background: var(--well);
      font-size: 13.5px;
    }
    strong {
      font-weight: 620;
    }
    ul {
      margin-top: 4px;
    }
    .now {
      padding: 0 4px;
      background: var(--mark);
    }
    .was {
      color: var(--ink-2);
    }
  `,
})
export class MeanwhileNote {
  readonly of = input.required<readonly Difference[] | undefined>();
}
