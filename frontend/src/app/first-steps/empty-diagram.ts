import { ChangeDetectionStrategy, Component, input } from '@angular/core';

const PX_PER_MS = 6.6;
const AROUND_MS = 31.8; // of time each way, and of light-time across

/** An empty spacetime diagram: one site's worldline and its light, at one scale for both axes, so that light stands at 45 degrees. */
@Component({
  selector: 'sw-empty-diagram',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <svg viewBox="-44 -240 352 500" role="img" [attr.aria-label]="'Empty diagram with the worldline of ' + site() + ' and its light'">
      <path class="cone" [attr.d]="'M0 0L' + far + ' ' + -far + 'H0ZM0 0L' + far + ' ' + far + 'H0Z'" />
      @for (ms of times; track ms) {
        <path class="grid" [attr.d]="'M0 ' + -ms * scale + 'H300'" />
        <text class="figure" text-anchor="end" x="-8" [attr.y]="4 - ms * scale">{{ (ms > 0 ? '+' : '') + ms }}</text>
      }
      @for (ms of places; track ms) {
        <path class="axis" [attr.d]="'M' + ms * scale + ' ' + far + 'v5'" />
        <text class="figure" text-anchor="middle" [attr.x]="ms * scale" [attr.y]="far + 19">{{ ms }}</text>
      }
      <path class="axis" [attr.d]="'M0 ' + far + 'H300'" />
      <path class="earth" [attr.d]="'M' + earth + ' ' + -far + 'V' + far" />
      <path class="light" [attr.d]="'M' + far + ' ' + -far + 'L0 0L' + far + ' ' + far" />
      <path class="worldline" [attr.d]="'M0 ' + (-far - 4) + 'V' + far" />
      <text class="site" text-anchor="middle" x="0" [attr.y]="-far - 12">{{ site() }}</text>
      <text transform="translate(58 -66) rotate(-45)">light leaving {{ site() }}</text>
      <text class="along" [attr.transform]="'translate(' + (earth - 7) + ' ' + (far - 10) + ') rotate(-90)'">
        straight through the Earth: 42.5
      </text>
      <text x="0" [attr.y]="far + 38">Light-time from {{ site() }}, light-ms</text>
      <text transform="translate(-38 6) rotate(-90)">ms</text>
    </svg>
  `,
  styles: `
    svg {
      display: block;
      width: 100%;
    }
    path {
      fill: none;
      stroke: var(--ink);
    }
    .cone {
      fill: var(--timelike-ground);
      stroke: none;
    }
    .grid {
      stroke: var(--rule-2);
    }
    .earth {
      stroke: var(--ink-3);
      stroke-dasharray: 3 3;
    }
    .light {
      stroke-width: 1.5;
    }
    .worldline {
      stroke-width: 1.6;
    }
    text {
      fill: var(--ink-2);
      font: 500 12px var(--sans);
    }
    .figure {
      font: 430 11px var(--mono);
    }
    .site {
      fill: var(--ink);
      font-weight: 640;
    }
    .along {
      font-size: 11px;
    }
  `,
})
export class EmptyDiagram {
  readonly site = input.required<string>();
  protected readonly scale = PX_PER_MS;
  protected readonly far = AROUND_MS * PX_PER_MS;
  /** Light through the Earth's diameter: 2 x 6371 km. */
  protected readonly earth = ((2 * 6371) / 299.792458) * PX_PER_MS;
  protected readonly times = [20, 10, 0, -10, -20];
  protected readonly places = [0, 10, 20, 30, 40];
}
