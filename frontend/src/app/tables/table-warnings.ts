import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { RouterLink } from '@angular/router';
import { SessionStore } from '../session/session-store';
import { Icon } from '../ui/icon';
import { TableStore } from './table-store';

/** What is doubtful about the tables of leap seconds and Earth orientation, above every page. */
@Component({
  selector: 'sw-table-warnings',
  imports: [Icon, RouterLink],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    @for (warning of warnings(); track $index) {
      <p>
        <sw-icon name="warning" /><span>{{ warning.text }}</span>
        @if (session.coordinatesAll()) {
          <a routerLink="/tables">Load a table</a>
        }
      </p>
    }
  `,
  styles: `
    p {
      display: flex;
      gap: 10px;
      align-items: center;
      min-height: 38px;
      padding: 4px 24px;
      border-bottom: 1px solid var(--rule);
      background: var(--well);
      font-size: 13.5px;
    }
    span {
      flex: 1;
    }
    a {
      display: inline-flex;
      align-items: center;
      min-height: 30px;
    }
    span::first-letter {
      text-transform: uppercase;
    }
    @media (max-width: 700px) {
      p {
        padding: 6px 14px;
      }
    }
  `,
})
export class TableWarnings {
  private readonly tables = inject(TableStore);
  protected readonly session = inject(SessionStore);
  protected readonly warnings = computed(() => this.tables.inForce.value()?.warnings ?? []);
}
