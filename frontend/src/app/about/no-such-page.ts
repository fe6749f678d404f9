import { ChangeDetectionStrategy, Component } from '@angular/core';
import { RouterLink } from '@angular/router';
import { Wordmark } from '../ui/wordmark';

/** What an address that leads nowhere shows to who is not signed in. */
@Component({
  selector: 'sw-no-such-page',
  imports: [RouterLink, Wordmark],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <header><sw-wordmark /></header>
    <main id="main" tabindex="-1">
      <h1>No such page</h1>
      <p>Nothing is at this address. Check how it is written, or start at <a routerLink="/">the first page</a>.</p>
    </main>
  `,
  styles: `
    :host {
      display: block;
      max-width: 720px;
      padding: 40px 44px;
    }
    h1 {
      margin: 40px 0 6px;
      font-size: 27px;
      font-weight: 600;
      letter-spacing: -0.018em;
    }
    @media (max-width: 700px) {
      :host {
        padding: 14px 16px;
      }
      sw-wordmark {
        font-size: 21px;
      }
      h1 {
        margin-top: 24px;
        font-size: 22px;
      }
    }
  `,
})
export class NoSuchPage {}
