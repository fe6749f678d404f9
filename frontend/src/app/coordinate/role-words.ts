import { ChangeDetectionStrategy, Component, inject, input } from '@angular/core';
import { type RoleHeld } from '#shared/contract/people';
import { InstantMark } from '../instants/instant';
import { NetworkStore } from '../networks/network-store';

/** A role and where it is held, and until when. */
@Component({
  selector: 'sw-role-words',
  imports: [InstantMark],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <strong>{{ of().role }}</strong> {{ networks.placeWords(of()) }}
    @if (of().expiresAt; as end) {
      <span class="note">until <sw-instant [of]="end" /></span>
    }
  `,
  styles: `
    strong {
      font-weight: 600;
    }
  `,
})
export class RoleWords {
  protected readonly networks = inject(NetworkStore);
  readonly of = input.required<RoleHeld>();
}
