import { ChangeDetectionStrategy, Component } from '@angular/core';

/** The product's name beside its sign: the axes of a frame moving at 0.34 c, at their true angles, and light at 45 degrees. */
@Component({
  selector: 'sw-wordmark',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <svg viewBox="0 0 26 26" aria-hidden="true">
      <path class="light" d="M4.2 21.8L21.8 4.2" />
      <path class="axis" d="M2.4 16.6L23.6 9.4M9.4 23.6L16.6 2.4" />
    </svg>
    <span><span class="slanted">Skew</span>line</span>
  `,
  styles: `
    :host {
      display: flex;
      gap: 12px;
      align-items: center;
      font-size: 30px;
      font-weight: 680;
      letter-spacing: -0.015em;
      line-height: 1.2;
    }
    svg {
      width: 1.25em;
      height: 1.25em;
    }
    .light {
      stroke: var(--ink-3);
      stroke-width: 1.5;
      stroke-linecap: round;
      stroke-dasharray: 0.1 3.1;
    }
    .axis {
      stroke: var(--ink);
      stroke-width: 2.5;
      stroke-linecap: round;
    }
    .slanted {
      font-weight: 520;
      margin-right: 0.5px;
    }
  `,
})
export class Wordmark {}
