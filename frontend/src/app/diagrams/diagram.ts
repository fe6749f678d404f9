import {
  afterNextRender,
  afterRenderEffect,
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  effect,
  ElementRef,
  inject,
  input,
  output,
  signal,
  viewChild,
} from '@angular/core';
import { type Quadtree, select, zoom, type ZoomBehavior, zoomIdentity, type ZoomTransform } from 'd3';
import { Preferences } from '../preferences/preferences';
import { coloursAt } from './colours';
import { MARK_KINDS, MARK_PX, type MarkKind, markPath } from './mark-shape';
import { type Scale, type Transform } from './one-scale';
import { MOST_MARKS, paintMarks } from './paint-marks';
import { type Leader, pathThrough, type Picture, type PictureMark, type PictureWord, round } from './picture';
import { pickingTree } from './picking';
import { type Plane } from './plane';
import { stepFrom, type Step } from './walk';

/** Up to so many marks each is a symbol of its own with its name; up to `MOST_IN_SVG` one path a kind; above they are painted. */
const MOST_NAMED = 120;
const MOST_IN_SVG = 2_000;
const PICK_PX = 14;
const SPEAK_EVERY_MS = 5_000;
const STEPS: Readonly<Record<string, Step>> = {
  ArrowLeft: 'earlier',
  ArrowRight: 'later',
  ArrowDown: 'site-before',
  ArrowUp: 'site-after',
};

/** A gesture of zooming or dragging, from one transform to the next. */
export interface Gesture {
  readonly from: Transform;
  readonly to: Transform;
  /** Whether it goes on. */
  readonly isOver: boolean;
}

/**
 * A picture with the marks of events: drawn as SVG while they are few, painted above, their density where they are many. One stop of the
 * Tab key: left and right go in time, up and down to the next site, Enter selects, Escape leaves.
 */
@Component({
  selector: 'sw-diagram',
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './diagram.html',
  styleUrl: './diagram.scss',
})
export class Diagram {
  readonly widthPx = input.required<number>();
  readonly heightPx = input.required<number>();
  readonly picture = input.required<Picture>();
  readonly x = input.required<Scale>();
  readonly y = input.required<Scale>();
  /** Where the events stand; a new object for each frame, its columns may be the same. */
  readonly plane = input.required<Plane>();
  /** Kinds of marks, by `MARK_KINDS`. */
  readonly kinds = input.required<Uint8Array>();
  /** Rows whose marks lose their fill, since they lie off the axis; absent where none does. */
  readonly hollow = input<Uint8Array | undefined>();
  /** Rows with a ring: of the coincidence that is shown. */
  readonly rings = input<readonly number[]>([]);
  readonly selected = input(-1);
  /** Place of each row's site from left to right, for the keyboard. */
  readonly sitePlaces = input.required<ArrayLike<number>>();
  readonly nameOf = input.required<(row: number) => string>();
  readonly label = input.required<string>();
  readonly leaders = input<readonly Leader[]>([]);
  readonly gutterPx = input(0);
  /** Rows that leaders stress. */
  readonly stressed = input<readonly number[]>([]);
  readonly canZoom = input(true);
  readonly picked = output<number>();
  readonly gesture = output<Gesture>();

  protected readonly id = `diagram-${++lastId}`;
  protected readonly hovered = signal(-1);
  protected readonly at = signal(-1);
  protected readonly spoken = signal('');
  private readonly svg = viewChild.required<ElementRef<SVGSVGElement>>('svg');
  private readonly canvas = viewChild.required<ElementRef<HTMLCanvasElement>>('canvas');
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly preferences = inject(Preferences);
  private readonly themeTurns = signal(0);
  private lastSpokenMs = 0;

  /** How many rows are within the box: all that each frame of a drag needs to know, however many there are. */
  private readonly many = computed(() => {
    const isIn = this.boxTest();
    const { count } = this.plane();
    let many = 0;
    for (let row = 0; row < count; row++) if (isIn(row)) many++;
    return many;
  });
  /** The rows within the box. */
  private readonly shown = computed<readonly number[]>(() => {
    const isIn = this.boxTest();
    const { count } = this.plane();
    const rows: number[] = [];
    for (let row = 0; row < count; row++) if (isIn(row)) rows.push(row);
    return rows;
  });
  protected readonly drawn = computed(() => {
    const many = this.many();
    return many <= MOST_IN_SVG ? 'svg' : many <= MOST_MARKS ? 'canvas' : 'density';
  });

  protected readonly singles = computed(() => {
    if (this.many() > MOST_NAMED) return [];
    return this.shown()
      .filter((row) => row !== this.selected())
      .map((row) => {
        const { x, y } = this.markOf(row);
        const kind = this.kindOf(row);
        return { row, kind, hollow: this.isHollow(row), path: markPath(kind, x, y, MARK_PX), name: this.nameOf()(row) };
      });
  });
  /** Marks of one kind as one path. */
  protected readonly groups = computed(() => {
    if (this.many() <= MOST_NAMED || this.drawn() !== 'svg') return [];
    const rows = this.shown();
    const half = rows.length > 600 ? MARK_PX * 0.6 : MARK_PX * 0.85;
    return MARK_KINDS.flatMap((kind, number) =>
      [false, true].map((hollow) => ({
        kind,
        hollow,
        path: rows
          .filter((row) => this.kinds()[row] === number && row !== this.selected() && this.isHollow(row) === hollow)
          .map((row) => {
            const { x, y } = this.markOf(row);
            return markPath(kind, x, y, half);
          })
          .join(''),
      })),
    ).filter(({ path }) => path !== '');
  });
  protected readonly ringed = computed(() => this.rings().filter((row) => this.isInBox(row)).map((row) => this.markOf(row))); // prettier-ignore
  protected readonly selectedMark = computed(() => {
    const row = this.selected();
    return row >= 0 && this.isInBox(row) ? this.markOf(row) : undefined;
  });
  /** The mark under the pointer or the keyboard. */
  protected readonly active = computed<PictureMark | undefined>(() => {
    const row = this.at() >= 0 ? this.at() : this.hovered();
    return row >= 0 && row < this.plane().count && this.isInBox(row) ? this.markOf(row) : undefined;
  });

  protected readonly frame = computed(() => {
    const { left, top, width, height } = this.picture().box;
    return `M${left} ${top}V${top + height}H${left + width}`;
  });

  protected readonly leaderPaths = computed(() => {
    const { box } = this.picture();
    const right = box.left + box.width;
    const stressed = new Set(this.stressed());
    return this.leaders()
      .filter(({ row }) => this.isInBox(row))
      .map(({ row, y }) => {
        const mark = this.markOf(row);
        const level = round(mark.y);
        return {
          row,
          hot: row === this.selected(),
          faint: !stressed.has(row) && row !== this.selected(),
          dotted: `M${round(mark.x + 10)} ${level}H${right + 8}`,
          path: pathThrough([
            [right + 8, level],
            [right + this.gutterPx(), y],
          ]),
        };
      });
  });

  private readonly tree = computed<Quadtree<number> | undefined>(() => {
    const [{ xMs, tMs }, x, y] = [this.plane(), this.x(), this.y()];
    return pickingTree(
      this.shown(),
      (row) => x(xMs[row] ?? 0),
      (row) => y(tMs[row] ?? 0),
    );
  });

  constructor() {
    const destroyed = inject(DestroyRef);
    const scheme = window.matchMedia('(prefers-color-scheme: dark)');
    const turn = (): void => this.themeTurns.update((turns) => turns + 1);
    scheme.addEventListener('change', turn);
    destroyed.onDestroy(() => scheme.removeEventListener('change', turn));
    afterNextRender(() => this.beginZoom());
    afterRenderEffect(() => {
      this.preferences.theme();
      this.themeTurns();
      this.paint();
    });
    effect(() => {
      const mark = this.at();
      if (mark >= 0) this.speak(this.nameOf()(mark));
    });
  }

  protected placeOf({ x, y, turnDeg = 0 }: PictureWord): string {
    return `translate(${round(x)} ${round(y)})${turnDeg === 0 ? '' : ` rotate(${turnDeg.toFixed(2)})`}`;
  }

  protected tipLeft({ x }: PictureMark): number {
    return Math.min(x + 16, Math.max(0, this.widthPx() - 220));
  }

  protected tipTop({ y }: PictureMark): number {
    return y + 14;
  }

  protected onKey(event: KeyboardEvent): void {
    const step = STEPS[event.key];
    if (step) {
      this.at.update((at) => stepFrom(this.plane(), this.shown(), this.sitePlaces(), at >= 0 ? at : this.selected(), step));
    } else if (event.key === 'Enter' && this.at() >= 0) {
      this.picked.emit(this.at());
    } else if (event.key === 'Escape' && (this.at() >= 0 || this.selected() >= 0)) {
      if (this.at() >= 0) this.at.set(-1);
      else this.picked.emit(-1);
    } else if ((event.key === '+' || event.key === '-') && this.canZoom()) {
      this.zoomBy(event.key === '+' ? 1.5 : 1 / 1.5);
    } else return;
    event.preventDefault();
    event.stopPropagation();
  }

  protected onFocus(): void {
    // By the keyboard alone: a click has chosen its mark already.
    if (this.svg().nativeElement.matches(':focus-visible') && this.at() < 0)
      this.at.set(stepFrom(this.plane(), this.shown(), this.sitePlaces(), this.selected(), 'later'));
  }

  protected onMove(event: PointerEvent): void {
    if (event.pointerType !== 'touch' && event.buttons === 0) this.hovered.set(this.find(event));
  }

  protected onClick(event: MouseEvent): void {
    const row = this.find(event);
    if (row >= 0) this.picked.emit(row);
  }

  private find(event: MouseEvent): number {
    const { left, top } = this.svg().nativeElement.getBoundingClientRect();
    return this.tree()?.find(event.clientX - left, event.clientY - top, PICK_PX) ?? -1;
  }

  private zoomBy(k: number): void {
    const { box } = this.picture();
    const [x, y] = [(box.left + box.width / 2) * (1 - k), (box.top + box.height / 2) * (1 - k)];
    this.gesture.emit({ from: zoomIdentity, to: { k, x, y }, isOver: true });
  }

  private beginZoom(): void {
    let before: ZoomTransform = zoomIdentity;
    const behaviour: ZoomBehavior<SVGSVGElement, unknown> = zoom<SVGSVGElement, unknown>()
      .filter((event: Event) => this.canZoom() && isMeant(event))
      .clickDistance(4)
      .on('zoom', ({ transform, sourceEvent }: { transform: ZoomTransform; sourceEvent: unknown }) => {
        if (sourceEvent) this.gesture.emit({ from: before, to: transform, isOver: false });
        before = transform;
      })
      .on('end', ({ transform }: { transform: ZoomTransform }) => this.gesture.emit({ from: transform, to: transform, isOver: true }));
    // One finger scrolls the page; two zoom.
    select(this.svg().nativeElement).call(behaviour).on('dblclick.zoom', null).style('touch-action', 'pan-x pan-y');
  }

  private paint(): void {
    const canvas = this.canvas().nativeElement;
    const inBox = this.many();
    const { box } = this.picture();
    const context = canvas.getContext('2d');
    if (!context) return;
    if (this.drawn() === 'svg') {
      if (canvas.width !== 0) canvas.width = 0;
      return;
    }
    const dense = window.devicePixelRatio;
    const [width, height] = [Math.round(box.width * dense), Math.round(box.height * dense)];
    if (canvas.width !== width || canvas.height !== height) Object.assign(canvas, { width, height });
    Object.assign(canvas.style, { left: `${box.left}px`, top: `${box.top}px`, width: `${box.width}px`, height: `${box.height}px` });
    context.setTransform(dense, 0, 0, dense, 0, 0);
    paintMarks(context, { plane: this.plane(), kinds: this.kinds(), x: this.x(), y: this.y(), box, inBox, colours: this.colours() });
  }

  private readonly colours = computed(() => {
    this.preferences.theme();
    this.themeTurns();
    return coloursAt(this.host);
  });

  /** Whether a row's mark is within the box, or touches it. */
  private boxTest(): (row: number) => boolean {
    const { box } = this.picture();
    const { xMs, tMs } = this.plane();
    const [x, y] = [this.x(), this.y()];
    const [x0, kx, y0, ky] = [x(0), x(1) - x(0), y(0), y(1) - y(0)];
    const [left, top, right, bottom] = [box.left - 1, box.top - 1, box.left + box.width + 1, box.top + box.height + 1];
    return (row) => {
      const px = x0 + kx * (xMs[row] ?? 0);
      const py = y0 + ky * (tMs[row] ?? 0);
      return px >= left && py >= top && px <= right && py <= bottom;
    };
  }

  private markOf(row: number): PictureMark {
    const { xMs, tMs } = this.plane();
    return { row, x: this.x()(xMs[row] ?? 0), y: this.y()(tMs[row] ?? 0) };
  }

  private isInBox(row: number): boolean {
    const { box } = this.picture();
    const { x, y } = this.markOf(row);
    return x >= box.left - 1 && y >= box.top - 1 && x <= box.left + box.width + 1 && y <= box.top + box.height + 1;
  }

  private isHollow = (row: number): boolean => this.hollow()?.[row] === 1;

  private kindOf = (row: number): MarkKind => MARK_KINDS[this.kinds()[row] ?? 0] ?? 'plain';

  /** Says where the keyboard is, at most once in five seconds: the mark's own name is read at each step anyway. */
  private speak(text: string): void {
    const nowMs = performance.now();
    if (nowMs - this.lastSpokenMs < SPEAK_EVERY_MS) return;
    this.lastSpokenMs = nowMs;
    this.spoken.set(text);
  }
}

let lastId = 0;

const isMeant = (event: Event): boolean => {
  if (event instanceof TouchEvent) return event.touches.length > 1;
  return event instanceof WheelEvent || (event instanceof MouseEvent && event.button === 0);
};
