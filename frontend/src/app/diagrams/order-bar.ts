import {
  ChangeDetectionStrategy,
  Component,
  computed,
  ElementRef,
  inject,
  input,
  signal,
  afterNextRender,
  DestroyRef,
} from '@angular/core';

/** A frame on the bar: its speed along the baseline and what it is called. */
export interface FrameOnBar {
  readonly name: string;
  /** Along the baseline, in c. */
  readonly velocityC: number;
}

const EDGE_PX = 14;
const LEAST_BOX_PX = 5;
const LEAST_APART_PX = 24;

/**
 * The order of a pair against the speed of frames along its baseline, -1 to 1 c: solid where the one leads, hatched where the other does, a
 * box with its error at the turning speed, and the frames as ticks.
 */
@Component({
  selector: 'sw-order-bar',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    @let d = drawn();
    <svg [attr.viewBox]="'0 0 ' + d.widthPx + ' 104'" role="img" [attr.aria-label]="words()">
      <defs>
        <pattern [id]="id" width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(35)">
          <path class="hatch" d="M0 0V6" />
        </pattern>
      </defs>
      <rect class="solid" [attr.x]="d.left" y="26" [attr.width]="d.turn - d.left" height="16" />
      <rect class="open" [attr.x]="d.turn" y="26" [attr.width]="d.right - d.turn" height="16" [attr.fill]="'url(#' + id + ')'" />
      @if (turningC() !== null) {
        <rect class="bound" [class.undecided]="!turns()" [attr.x]="d.boxLeft" y="22" [attr.width]="d.boxRight - d.boxLeft" height="24" />
        <path class="turn" [attr.d]="'M' + d.turn + ' 22v24'" />
        <text class="figure turning" [attr.x]="d.turnText" y="17" text-anchor="middle">{{ turningText() }}</text>
      }
      @if (d.turn - d.left > 96) {
        <text class="who" [attr.x]="d.left + 4" y="17">{{ first() }} first</text>
      }
      @if (d.right - d.turn > 96 && turns()) {
        <text class="who" [attr.x]="d.right - 4" y="17" text-anchor="end">{{ second() }} first</text>
      }
      @for (tick of d.ticks; track tick.c) {
        <path class="scale" [attr.d]="'M' + tick.x + ' 42v5'" />
        <text class="figure" [attr.x]="tick.x" y="98" [attr.text-anchor]="tick.anchor">{{ tick.text }}</text>
      }
      @for (frame of d.frames; track $index) {
        <path class="frame" [attr.d]="frame.path" />
        <svg [attr.x]="frame.x - 11" y="56" width="22" height="22" viewBox="-12 -12 24 24" class="glyph">
          <title>{{ frame.name }}</title>
          <path class="rest" d="M-10.5 0H10.5M0 -10.5V10.5" />
          <path class="light" d="M-7.42 7.42L7.42 -7.42" />
          <path class="axes" [attr.d]="frame.axes" />
        </svg>
      }
    </svg>
  `,
  styles: `
    :host {
      display: block;
      width: 100%;
    }
    svg {
      display: block;
      width: 100%;
      overflow: visible;
    }
    .solid {
      fill: var(--ink);
    }
    .open {
      stroke: var(--ink);
    }
    .hatch {
      stroke: var(--ink);
      stroke-width: 1.6;
    }
    .bound {
      fill: var(--sheet);
      stroke: var(--spacelike);
      stroke-width: 1.4;
    }
    .bound.undecided {
      stroke: var(--undecided);
      stroke-dasharray: 3 2;
    }
    .turn {
      stroke: var(--spacelike);
      stroke-width: 2;
    }
    .bound.undecided + .turn {
      stroke: var(--undecided);
    }
    text {
      fill: var(--ink-2);
      font: 500 12px var(--sans);
    }
    .who {
      fill: var(--ink);
      font-weight: 620;
    }
    .figure {
      font: 430 11px var(--mono);
    }
    .figure.turning {
      fill: var(--spacelike);
      font-size: 12px;
      font-weight: 620;
    }
    .bound.undecided ~ .turning {
      fill: var(--undecided);
    }
    .scale {
      stroke: var(--ink-3);
    }
    .frame {
      fill: none;
      stroke: var(--ink);
      stroke-width: 1.2;
    }
    .glyph path {
      stroke: var(--ink-3);
      stroke-width: 0.8;
    }
    .glyph .light {
      stroke-dasharray: 1.6 1.8;
    }
    .glyph .axes {
      stroke: var(--ink);
      stroke-width: 1.7;
      stroke-linecap: round;
    }
  `,
})
export class OrderBar {
  /** Who leads in frames slower than the turning speed, and in the geocentric one. */
  readonly first = input.required<string>();
  readonly second = input.required<string>();
  /** In c, toward the second; null where no frame turns the order. */
  readonly turningC = input.required<number | null>();
  /** Half width of the box, in c: as many standard errors as make a decision. */
  readonly halfC = input(0);
  /** Whether the pair is spacelike beyond its error. */
  readonly turns = input(true);
  readonly frames = input<readonly FrameOnBar[]>([]);
  protected readonly id = `order-bar-${++lastId}`;
  private readonly widthPx = signal(420);

  protected readonly turningText = computed(() => this.turningC()?.toFixed(3) ?? '');
  protected readonly words = computed(() => {
    const turning = this.turningC();
    if (turning === null) return `${this.first()} first in every frame`;
    return `Order against frame speed along the baseline: ${this.first()} first below ${this.turningText()} c, ${this.second()} first above`;
  });

  protected readonly drawn = computed(() => {
    const widthPx = this.widthPx();
    const at = (c: number): number => round(EDGE_PX + ((c + 1) / 2) * (widthPx - 2 * EDGE_PX));
    const turning = this.turningC();
    const turn = turning === null ? at(1) : at(Math.min(1, turning));
    const half = Math.max(LEAST_BOX_PX, (this.halfC() / 2) * (widthPx - 2 * EDGE_PX));
    return {
      widthPx,
      left: at(-1),
      right: at(1),
      turn,
      turnText: Math.min(Math.max(turn, at(-1) + 18), at(1) - 18),
      boxLeft: round(Math.max(at(-1), turn - half)),
      boxRight: round(turn + half),
      ticks: [-1, -0.5, 0, 0.5, 1].map((c) => ({
        c,
        x: at(c),
        text: String(c).replace('-', '\u2212'),
        anchor: 'middle',
      })),
      frames: apart(this.frames().map(({ name, velocityC }) => ({ name, velocityC, at: at(velocityC) }))),
    };
  });

  constructor() {
    const host = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
    const destroyed = inject(DestroyRef);
    afterNextRender(() => {
      const sizes = new ResizeObserver(() => {
        if (host.clientWidth > 0) this.widthPx.set(host.clientWidth);
      });
      sizes.observe(host);
      destroyed.onDestroy(() => sizes.disconnect());
    });
  }
}

let lastId = 0;

const round = (px: number): number => Math.round(px * 100) / 100;

/** Glyphs moved so far to the right that they do not touch, each with an elbow from its tick. */
function apart(frames: readonly { readonly name: string; readonly velocityC: number; readonly at: number }[]) {
  const sorted = [...frames].sort((a, b) => a.at - b.at);
  let free = 0;
  return sorted.map(({ name, velocityC, at }) => {
    const x = round(Math.max(at, free));
    free = x + LEAST_APART_PX;
    const angle = Math.atan(velocityC);
    const [far, near] = [round(10.5 * Math.cos(angle)), round(10.5 * Math.sin(angle))];
    return { name, x, path: `M${at} 42v8H${x}v5`, axes: `M${-far} ${near}L${far} ${-near}M${-near} ${far}L${near} ${-far}` };
  });
}
