import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';

const HALF = 10.5;

/** A frame by its axes at their true angles: those of rest thin, light dotted at 45 degrees, the moving frame's own in ink. */
@Component({
  selector: 'sw-frame-glyph',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <svg viewBox="-12 -12 24 24" aria-hidden="true">
      <path class="rest" d="M-10.5 0H10.5M0 -10.5V10.5" />
      <path class="light" d="M-7.42 7.42L7.42 -7.42" />
      <path class="axes" [attr.d]="axes()" />
    </svg>
  `,
  styles: `
    :host {
      display: block;
      flex: none;
      width: 20px;
      height: 20px;
    }
    svg {
      display: block;
    }
    path {
      stroke: var(--ink-3);
      stroke-width: 0.8;
    }
    .rest {
      opacity: 0.75;
    }
    .light {
      stroke-dasharray: 1.6 1.8;
    }
    .axes {
      stroke: currentColor;
      stroke-width: 1.7;
      stroke-linecap: round;
    }
  `,
})
export class FrameGlyph {
  /** Speed of the frame along the axis that is drawn, in c, -1 to 1. */
  readonly velocityC = input(0);
  protected readonly axes = computed(() => {
    const angle = Math.atan(this.velocityC());
    const far = round(HALF * Math.cos(angle));
    const near = round(HALF * Math.sin(angle));
    return `M${-far} ${near}L${far} ${-near}M${-near} ${far}L${near} ${-far}`;
  });
}

const round = (value: number): number => Math.round(value * 100) / 100;
