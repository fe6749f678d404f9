import { ChangeDetectionStrategy, Component } from '@angular/core';
import { RouterLink } from '@angular/router';

/** What an address that leads nowhere shows to who is signed in. */
@Component({
  selector: 'sw-not-here',
  imports: [RouterLink],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <main class="place" id="main" tabindex="-1">
      <header><h1>No such page</h1></header>
      <p>
        Nothing is at this address. Check how it is written, go on to <a routerLink="/">your first page</a>, or press Ctrl K to find one.
      </p>
    </main>
  `,
})
export class NotHere {}
