import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { InstantMark } from '../instants/instant';
import { Icon } from '../ui/icon';
import { ConnectionStore } from './connection-store';

/** Says that the server is not reached, how old what is shown is, and offers to ask again. */
@Component({
  selector: 'sw-offline-banner',
  imports: [Icon, InstantMark],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <div role="status">
      @if (connection.offlineSince(); as since) {
        <div class="banner">
          <sw-icon name="cloud-off" />
          <p>The server was last reached at <sw-instant [of]="since" />. What is shown arrived before then.</p>
          <button type="button" [attr.aria-disabled]="connection.asking()" (click)="connection.ask()">Retry now</button>
        </div>
      }
    </div>
  `,
  styles: `
    .banner {
      display: flex;
      gap: 12px;
      align-items: center;
      min-height: 42px;
      padding: 6px 24px;
      background: var(--ink);
      color: var(--on-ink);
    }
    p {
      flex: 1;
      font-weight: 560;
    }
    sw-instant {
      --ink-2: var(--on-ink);
    }
    button {
      min-height: 32px;
      border: 0;
      background: none;
      color: inherit;
      font: 620 14px var(--sans);
      text-decoration: underline;
      text-underline-offset: 2px;
      cursor: pointer;
    }
    button:focus-visible {
      outline-color: var(--on-ink);
    }
    @media (max-width: 700px) {
      .banner {
        padding: 6px 14px;
      }
    }
  `,
})
export class OfflineBanner {
  protected readonly connection = inject(ConnectionStore);
}
