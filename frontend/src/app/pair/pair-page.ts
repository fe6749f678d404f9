import { ChangeDetectionStrategy, Component, input } from '@angular/core';

/** Any two events whatever: what can be said of their order, and what it rests on. */
@Component({
  selector: 'sw-pair-page',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <main class="place" id="main" tabindex="-1">
      <header><h1>Pair</h1></header>
    </main>
  `,
})
export class PairPage {
  /** From the address: the ids of two events, in either order. */
  readonly eventA = input.required<string>();
  readonly eventB = input.required<string>();
}
