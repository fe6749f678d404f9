import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { RouterLink } from '@angular/router';
import { SessionStore } from '../session/session-store';

/** What a page shows to who may not see it. */
@Component({
  selector: 'sw-not-permitted',
  imports: [RouterLink],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <main class="place" id="main" tabindex="-1">
      <header><h1>Not permitted</h1></header>
      <p>
        {{ roles() }} A coordinator can give you the role that this page wants. Meanwhile go on to <a routerLink="/">your first page</a>.
      </p>
    </main>
  `,
})
export class NotPermitted {
  private readonly session = inject(SessionStore);
  protected readonly roles = computed(() => {
    const held = this.session.roles();
    return held.length === 0 ? 'You hold no role at present.' : `You are ${held.join(' and ')} here, and this page is for another role.`;
  });
}
