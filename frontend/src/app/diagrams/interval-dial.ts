import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { type IntervalClass } from '#shared/relativity/verdict';
import { dialAngles } from './dial-angles';

const R = 27;
const LEAST_WEDGE_DEG = 1.2; // that it is seen

/** A pair as its step from 'at one instant' (flat) to 'at one place' (upright): light at 45 degrees, its error as a wedge about the needle. */
@Component({
  selector: 'sw-interval-dial',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <svg
      viewBox="-1.5 -28.5 30 30"
      [class]="of()"
      [attr.role]="label() ? 'img' : null"
      [attr.aria-label]="label() || null"
      [attr.aria-hidden]="!label() || null"
    >
      <path class="ground" d="M0 0H27A27 27 0 0 0 0 -27Z" />
      @let d = drawn();
      <path class="wedge" [attr.d]="d.wedge" />
      <path class="edge" d="M0 0H27A27 27 0 0 0 0 -27Z" />
      <path class="light" d="M0 0L19.09 -19.09" />
      <path class="needle" [attr.d]="d.needle" />
    </svg>
  `,
  styles: `
    :host {
      display: block;
      flex: none;
      width: 28px;
      height: 28px;
    }
    svg {
      display: block;
      overflow: visible;
    }
    path {
      fill: none;
    }
    .ground {
      fill: var(--well);
      opacity: 0.55;
    }
    .edge {
      stroke: var(--ink-3);
      stroke-linejoin: round;
      vector-effect: non-scaling-stroke;
    }
    .light {
      stroke: var(--ink);
      stroke-dasharray: 2 2;
      vector-effect: non-scaling-stroke;
    }
    .needle {
      stroke-width: 2.2;
      stroke-linecap: round;
      vector-effect: non-scaling-stroke;
    }
    .wedge {
      opacity: 0.3;
    }
    .timelike .needle {
      stroke: var(--timelike);
    }
    .timelike .wedge {
      fill: var(--timelike);
    }
    .spacelike .needle {
      stroke: var(--spacelike);
    }
    .spacelike .wedge {
      fill: var(--spacelike);
    }
    .undecided .needle {
      stroke: var(--undecided);
      stroke-dasharray: 3 3;
    }
    .undecided .wedge {
      fill: var(--undecided);
      opacity: 0.38;
    }
  `,
})
export class IntervalDial {
  readonly of = input.required<IntervalClass>();
  /** Time from the earlier to the later, ns. */
  readonly dtNs = input.required<number>();
  /** Light-time between them, ns. */
  readonly lightNs = input.required<number>();
  /** Half width of the wedge: as many standard errors of the gap as make a decision, ns. */
  readonly halfNs = input(0);
  /** Where no words stand beside it. */
  readonly label = input('');
  protected readonly drawn = computed(() => {
    const { deg, fromDeg, toDeg } = dialAngles(this.dtNs(), this.lightNs(), this.halfNs());
    const from = point(Math.max(0, Math.min(fromDeg, deg - LEAST_WEDGE_DEG)));
    const to = point(Math.min(90, Math.max(toDeg, deg + LEAST_WEDGE_DEG)));
    return { needle: `M0 0L${point(deg)}`, wedge: `M0 0L${from}A${R} ${R} 0 0 0 ${to}Z` };
  });
}

const point = (deg: number): string => {
  const rad = (deg * Math.PI) / 180;
  return `${(R * Math.cos(rad)).toFixed(2)} ${(-R * Math.sin(rad)).toFixed(2)}`;
};
