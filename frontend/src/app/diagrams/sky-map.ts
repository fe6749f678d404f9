import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { type IntervalClass } from '#shared/relativity/verdict';
import { type SkyGiven, skyPicture } from './sky-picture';

const WIDTH_PX = 276;
const HEIGHT_PX = 138;

/** The direction of a baseline on the sky, and the ring from which one plane wave can have come to both its ends. */
@Component({
  selector: 'sw-sky-map',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    @let d = drawn();
    <svg viewBox="0 0 276 138" role="img" [class]="of()" [attr.aria-label]="label()">
      <path class="sky" [attr.d]="d.outline" />
      <path class="graticule" [attr.d]="d.graticule" />
      @if (d.ring; as ring) {
        <path class="band" [attr.d]="ring.band" />
        <path class="ring" [attr.d]="ring.middle" />
      }
      <path class="edge" [attr.d]="d.outline" />
      <circle class="away" [attr.cx]="d.away.x" [attr.cy]="d.away.y" r="4.5" />
      <circle class="toward" [attr.cx]="d.toward.x" [attr.cy]="d.toward.y" r="6.5" />
      <circle class="core" [attr.cx]="d.toward.x" [attr.cy]="d.toward.y" r="2" />
    </svg>
  `,
  styles: `
    :host {
      display: block;
      max-width: 340px;
    }
    svg {
      display: block;
      width: 100%;
    }
    path {
      fill: none;
    }
    .sky {
      fill: var(--sheet);
    }
    .edge {
      stroke: var(--ink);
    }
    .graticule {
      stroke: var(--rule);
      stroke-width: 0.7;
    }
    .ring {
      stroke: var(--spacelike);
      stroke-width: 1.7;
    }
    .band {
      fill: var(--spacelike);
      opacity: 0.24;
    }
    .undecided .ring {
      stroke: var(--undecided);
      stroke-dasharray: 4 3;
    }
    .undecided .band {
      fill: var(--undecided);
    }
    .toward {
      fill: var(--mark);
      stroke: var(--ink);
      stroke-width: 1.6;
    }
    .core {
      fill: var(--ink);
    }
    .away {
      fill: var(--sheet);
      stroke: var(--ink);
      stroke-width: 1.4;
    }
  `,
})
export class SkyMap {
  readonly of = input.required<IntervalClass>();
  readonly sky = input.required<Omit<SkyGiven, 'widthPx' | 'heightPx'>>();
  readonly label = input.required<string>();
  protected readonly drawn = computed(() => skyPicture({ ...this.sky(), widthPx: WIDTH_PX, heightPx: HEIGHT_PX }));
}
