import { ChangeDetectionStrategy, Component } from '@angular/core';
import { Empty } from '../ui/states';

/** The place of the desk, until it is built in. */
@Component({
  selector: 'sw-desk-place',
  imports: [Empty],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <main class="place" id="main" tabindex="-1">
      <header><h1>Desk</h1></header>
      <sw-empty heading="No triggers yet">The first trigger of a site will appear on its worldline.</sw-empty>
    </main>
  `,
})
export class DeskPlace {}
