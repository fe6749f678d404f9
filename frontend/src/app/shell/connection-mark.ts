import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { ConnectionStore } from '../connection/connection-store';
import { InstantMark } from '../instants/instant';

/** How the data on screen stand to the network's: live, catching up, nothing streaming, or not reached. */
@Component({
  selector: 'sw-connection-mark',
  imports: [InstantMark],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <i [class.full]="live()" aria-hidden="true"></i>
    <span>{{ word() }}</span>
    @if (connection.stream(); as stream) {
      <span class="age">{{ stream.behindS.toFixed(1) }} s behind</span>
      @if (stream.completeUpTo; as upTo) {
        <span class="age">complete up to <sw-instant [of]="upTo" /></span>
      }
    }
  `,
  styles: `
    :host {
      display: flex;
      gap: 8px;
      align-items: center;
      font-size: 13px;
      font-weight: 560;
      white-space: nowrap;
    }
    i {
      width: 8px;
      height: 8px;
      border: 1.5px solid var(--ink-3);
      border-radius: 50%;
    }
    i.full {
      border: 0;
      background: var(--ink);
      box-shadow: 0 0 0 3px var(--mark);
    }
    .age {
      color: var(--ink-3);
      font-weight: 430;
    }
    @media (max-width: 1100px) {
      .age {
        display: none;
      }
    }
  `,
})
export class ConnectionMark {
  protected readonly connection = inject(ConnectionStore);
  protected readonly live = computed(() => !this.connection.offline() && this.connection.stream()?.state === 'live');
  protected readonly word = computed(() => {
    if (this.connection.offline()) return 'Offline';
    const stream = this.connection.stream();
    if (!stream) return 'No streams yet';
    return { live: 'Live', 'catching-up': 'Catching up', quiet: 'Quiet' }[stream.state];
  });
}
