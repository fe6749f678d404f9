import {
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  ElementRef,
  inject,
  input,
  linkedSignal,
  output,
  signal,
  viewChild,
} from '@angular/core';
import { markPath } from '../diagrams/mark-shape';
import { MOST_SPEED_C } from './desk-address';
import { plain } from './figures';

/** A turning speed as a tick: of which site's event, and whether it is the pair's own. */
export interface TurningTick {
  readonly speedC: number;
  readonly site: string;
  readonly isMain: boolean;
}

const STEP_C = 0.01;
const FINE_C = 0.001;
const EDGE_PX = 16;
const SLOW_C = 0.0095; // below, a speed of three decimals would say little

/** The speed of the frame along the baseline, turning speeds and frames as ticks. Arrows go by 0.01 c, with Shift by 0.001 c. */
@Component({
  selector: 'sw-speed-slider',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    @let d = drawn();
    <div
      #bar
      class="slider"
      role="slider"
      tabindex="0"
      [attr.aria-label]="'Frame speed along ' + from() + ' to ' + to() + ', in c'"
      [attr.aria-valuemin]="-most"
      [attr.aria-valuemax]="most"
      [attr.aria-valuenow]="speedC()"
      [attr.aria-valuetext]="words()"
      (pointerdown)="begin($event)"
      (pointermove)="drag($event)"
      (pointerup)="dragging.set(false)"
      (pointercancel)="dragging.set(false)"
      (keydown)="onKey($event)"
    >
      <svg [attr.viewBox]="'0 0 ' + widthPx() + ' 78'" [attr.height]="78" [attr.width]="widthPx()" aria-hidden="true">
        <rect class="groove" [attr.x]="d.at(-1)" y="30" [attr.width]="d.at(1) - d.at(-1)" height="8" />
        <rect class="reach" [attr.x]="d.reachLeft" y="30" [attr.width]="d.reachWidth" height="8" />
        @for (tick of d.turnings; track $index) {
          <path class="turning" [class.main]="tick.isMain" [attr.d]="'M' + tick.x + ' 23V39'" />
          <path class="lozenge" [attr.d]="tick.lozenge" />
        }
        @if (d.main; as main) {
          <text class="turns" [attr.x]="main.textX" y="14" [attr.text-anchor]="main.anchor">
            {{ main.site }} turns at
            <tspan class="figure">{{ main.text }}</tspan>
          </text>
        }
        @for (frame of d.frames; track $index) {
          <path class="frame-tick" [attr.d]="'M' + frame.x + ' 38v6'" />
          <svg [attr.x]="frame.x - 9" y="45" width="18" height="18" viewBox="-12 -12 24 24" class="glyph">
            <path class="rest" d="M-10.5 0H10.5M0 -10.5V10.5" />
            <path class="axes" [attr.d]="frame.axes" />
          </svg>
        }
        <text class="figure" [attr.x]="d.at(-1)" y="54" text-anchor="middle">−1</text>
        <text class="figure" [attr.x]="d.at(1)" y="54" text-anchor="middle">1</text>
        <circle class="halo" [attr.cx]="d.x" cy="34" r="15" />
        <circle class="thumb" [attr.cx]="d.x" cy="34" r="10.5" />
        <path class="grip" [attr.d]="'M' + (d.x - 2) + ' 30v8M' + (d.x + 2) + ' 30v8'" />
        <text class="figure value" [attr.x]="d.valueX" y="73" text-anchor="middle">{{ value() }}</text>
      </svg>
    </div>
  `,
  styles: `
    :host {
      display: block;
    }
    .slider {
      border-radius: 3px;
      cursor: ew-resize;
      touch-action: pan-y;
    }
    svg {
      display: block;
      overflow: visible;
    }
    .groove {
      fill: var(--sheet);
      stroke: var(--ink);
    }
    .reach {
      fill: var(--ink);
    }
    .turning {
      stroke: var(--spacelike);
      stroke-width: 1.2;
    }
    .turning.main {
      stroke-width: 2;
    }
    .lozenge {
      fill: var(--sheet);
      stroke: var(--spacelike);
      stroke-width: 1.6;
    }
    text {
      fill: var(--ink-2);
      font: 500 12px var(--sans);
      user-select: none;
    }
    .figure {
      font: 430 11px var(--mono);
    }
    .turns {
      fill: var(--spacelike);
      font-weight: 600;
    }
    .turns .figure {
      font-size: 12px;
      font-weight: 560;
    }
    .frame-tick {
      stroke: var(--ink);
    }
    .glyph .rest {
      stroke: var(--ink-3);
      stroke-width: 0.8;
    }
    .glyph .axes {
      stroke: var(--ink);
      stroke-width: 1.9;
      stroke-linecap: round;
    }
    .halo {
      fill: none;
      stroke: var(--ink);
      stroke-width: 2;
    }
    .thumb {
      fill: var(--mark);
      stroke: var(--ink);
      stroke-width: 1.6;
    }
    .grip {
      stroke: var(--ink);
    }
    .value {
      fill: var(--ink);
      font-size: 12.5px;
      font-style: italic;
      font-weight: 640;
    }
  `,
})
export class SpeedSlider {
  readonly speedC = input.required<number>();
  readonly from = input.required<string>();
  readonly to = input.required<string>();
  readonly turnings = input<readonly TurningTick[]>([]);
  readonly frames = input<readonly { readonly velocityC: number }[]>([]);
  readonly moved = output<number>();
  protected readonly most = MOST_SPEED_C;
  protected readonly dragging = signal(false);
  /** Where it was moved last: keys may come faster than the page is drawn anew. */
  private readonly latestC = linkedSignal(() => this.speedC());
  protected readonly widthPx = signal(400);
  private readonly bar = viewChild.required<ElementRef<HTMLElement>>('bar');

  protected readonly gamma = computed(() => 1 / Math.sqrt((1 - this.speedC()) * (1 + this.speedC())));
  protected readonly value = computed(() =>
    this.speedC() === 0
      ? '\u03b2 0'
      : `\u03b2 ${plain(this.speedC(), Math.abs(this.speedC()) < SLOW_C ? 5 : 3)}, \u03b3 ${this.gamma().toFixed(3)}`,
  );
  protected readonly words = computed(() => {
    if (this.speedC() === 0) return 'at rest in the geocentric frame';
    return `${Math.abs(this.speedC()).toFixed(3)} c toward ${this.speedC() > 0 ? this.to() : this.from()}, gamma ${this.gamma().toFixed(3)}`;
  });

  protected readonly drawn = computed(() => {
    const widthPx = this.widthPx();
    const at = (c: number): number => Math.round((EDGE_PX + ((c + 1) / 2) * (widthPx - 2 * EDGE_PX)) * 100) / 100;
    const x = at(this.speedC());
    const main = this.turnings().find(({ isMain }) => isMain);
    const mainX = main ? at(main.speedC) : 0;
    return {
      at,
      x,
      reachLeft: Math.min(at(0), x),
      reachWidth: Math.abs(x - at(0)),
      valueX: Math.min(Math.max(x, 62), widthPx - 62),
      turnings: this.turnings().map(({ speedC, isMain }) => ({
        x: at(speedC),
        isMain,
        lozenge: markPath('spacelike', at(speedC), 20, isMain ? 4.6 : 3.6),
      })),
      main: main && {
        site: main.site,
        text: plain(main.speedC, 3),
        textX: mainX > widthPx / 2 ? mainX + 6 : mainX - 6,
        anchor: mainX > widthPx / 2 ? 'end' : 'start',
      },
      frames: this.frames().map(({ velocityC }) => ({ x: at(velocityC), axes: axesOf(velocityC) })),
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

  protected begin(event: PointerEvent): void {
    if (event.button !== 0) return;
    this.bar().nativeElement.setPointerCapture(event.pointerId);
    this.dragging.set(true);
    this.drag(event);
  }

  protected drag(event: PointerEvent): void {
    if (!this.dragging()) return;
    const { left, width } = this.bar().nativeElement.getBoundingClientRect();
    const c = ((event.clientX - left - EDGE_PX) / (width - 2 * EDGE_PX)) * 2 - 1;
    this.say(c);
  }

  protected onKey(event: KeyboardEvent): void {
    const step = event.shiftKey ? FINE_C : STEP_C;
    const now = this.latestC();
    const to: Readonly<Record<string, number>> = {
      ArrowRight: now + step,
      ArrowUp: now + step,
      ArrowLeft: now - step,
      ArrowDown: now - step,
      PageUp: now + 0.1,
      PageDown: now - 0.1,
      Home: -MOST_SPEED_C,
      End: MOST_SPEED_C,
      '0': 0,
    };
    const c = to[event.key];
    if (c === undefined) return;
    event.preventDefault();
    event.stopPropagation();
    this.say(Math.round(c / FINE_C) * FINE_C);
  }

  private say(c: number): void {
    const rounded = Math.round(Math.min(MOST_SPEED_C, Math.max(-MOST_SPEED_C, c)) * 1e6) / 1e6;
    const speedC = rounded === 0 ? 0 : rounded;
    this.latestC.set(speedC);
    this.moved.emit(speedC);
  }
}

function axesOf(velocityC: number): string {
  const angle = Math.atan(velocityC);
  const [far, near] = [(10.5 * Math.cos(angle)).toFixed(2), (10.5 * Math.sin(angle)).toFixed(2)];
  return `M-${far} ${near}L${far} ${negated(near)}M${negated(near)} ${far}L${near} -${far}`;
}

const negated = (text: string): string => (text.startsWith('-') ? text.slice(1) : `-${text}`);
