import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { NetworkStore } from '../networks/network-store';

/** Which network all pages are about; where there is one alone, its name. */
@Component({
  selector: 'sw-network-chooser',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    @let all = networks.networks.value() ?? [];
    @let network = networks.network();
    @if (all.length > 1) {
      <select #box aria-label="Network" [value]="network?.id" (change)="networks.choose(+box.value)">
        @for (one of all; track one.id) {
          <option [value]="one.id" [selected]="one.id === network?.id">{{ one.name }}</option>
        }
      </select>
    } @else if (network) {
      <span>{{ network.name }}</span>
    }
  `,
  styles: `
    :host {
      min-width: 0;
      font-size: 13.5px;
      font-weight: 560;
    }
    span {
      display: block;
      overflow: hidden;
      text-overflow: ellipsis;
      white-space: nowrap;
    }
    select {
      max-width: 220px;
      height: 34px;
      padding: 0 8px;
      border: 1px solid var(--rule);
      border-radius: var(--radius);
      background: var(--sheet);
      color: inherit;
      font: inherit;
    }
    @media (max-width: 900px) {
      :host {
        display: none;
      }
    }
  `,
})
export class NetworkChooser {
  protected readonly networks = inject(NetworkStore);
}
