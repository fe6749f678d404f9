import { ChangeDetectionStrategy, Component, input, output } from '@angular/core';
import { Icon } from './icon';

/** Where nothing is yet: what is missing, and the one next act put inside. */
@Component({
  selector: 'sw-empty',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <svg viewBox="0 0 92 78" aria-hidden="true">
      <path class="worldline" d="M22 4V74M40 4V74M58 4V74M76 4V74" />
      <path class="light" d="M4 40L40 4M4 40L38 74" />
      <path class="axis" d="M4 4V74H88" />
    </svg>
    <div>
      <h2>{{ heading() }}</h2>
      <p><ng-content /></p>
      <ng-content select="[act]" />
    </div>
  `,
  styles: `
    :host {
      display: flex;
      gap: 22px;
      align-items: center;
      padding: 20px 22px;
      border: 1px solid var(--rule);
      border-radius: var(--radius);
      background: var(--sheet);
    }
    svg {
      flex: none;
      width: 92px;
      fill: none;
      stroke: var(--ink-3);
    }
    .worldline {
      stroke: var(--rule);
    }
    .light {
      stroke-dasharray: 3 3;
    }
    h2 {
      font-size: 16px;
    }
    p {
      margin: 3px 0 0;
      max-width: 62ch;
      color: var(--ink-2);
    }
    @media (max-width: 700px) {
      svg {
        display: none;
      }
    }
  `,
})
export class Empty {
  readonly heading = input.required<string>();
}

/** What could not be loaded, why, and how to try again. */
@Component({
  selector: 'sw-fault',
  imports: [Icon],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <sw-icon name="error" />
    <div role="alert">
      <p>
        <strong>{{ heading() }}</strong> {{ text() }}
      </p>
      @if (id()) {
        <p class="id">
          In the log under <span class="figure">{{ id() }}</span>
        </p>
      }
    </div>
    <button class="btn" type="button" (click)="again.emit()">Try again</button>
  `,
  styles: `
    :host {
      display: flex;
      flex-wrap: wrap;
      gap: 10px;
      align-items: center;
      padding: 12px 14px;
      border: 1px solid var(--error);
      border-radius: var(--radius);
      background: var(--sheet);
    }
    sw-icon,
    strong {
      color: var(--error);
    }
    div {
      flex: 1 1 260px;
    }
    .id {
      color: var(--ink-2);
      font-size: 12.5px;
    }
  `,
})
export class Fault {
  readonly heading = input.required<string>();
  readonly text = input.required<string>();
  readonly id = input<string | undefined>();
  readonly again = output();
}

/** The rows that are on their way, so that nothing jumps when they come. */
@Component({
  selector: 'sw-skeleton',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <span class="visually-hidden" role="status">Loading.</span>
    @for (row of [1, 2, 3, 4, 5]; track row) {
      <div></div>
    }
  `,
  styles: `
    :host {
      display: grid;
    }
    div {
      height: 42px;
      border-bottom: 1px solid var(--rule);
      background: linear-gradient(var(--well), var(--well)) 0 50% / 46% 12px no-repeat;
      animation: sw-breathe 1.6s ease-in-out infinite alternate;
    }
    div:nth-child(odd) {
      background-size: 34% 12px;
    }
    @keyframes sw-breathe {
      to {
        opacity: 0.45;
      }
    }
    @media (prefers-reduced-motion: reduce) {
      div {
        animation: none;
      }
    }
  `,
})
export class Skeleton {}
