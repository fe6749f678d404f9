import { CdkFixedSizeVirtualScroll, CdkVirtualForOf, CdkVirtualScrollViewport } from '@angular/cdk/scrolling';
import {
  afterRenderEffect,
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  ElementRef,
  inject,
  input,
  output,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { NS_PER_LIGHT_M } from '#shared/constants';
import { type CoincidenceBrief } from '#shared/contract/coincidence';
import { IntervalDial } from '../diagrams/interval-dial';
import { type Leader } from '../diagrams/picture';
import { InstantPipe } from '../instants/instant-pipe';
import { Preferences } from '../preferences/preferences';
import { FrameGlyph } from '../ui/frame-glyph';

import { IntervalMark } from '../ui/interval-mark';
import { Empty, Fault, Skeleton } from '../ui/states';
import { DeskEvents } from './desk-events';
import { DeskLists } from './desk-lists';
import { DeskPicture } from './desk-picture';
import { DeskPlace } from './desk-place';
import { HEAD_PX } from './event-table';
import { margin, timeText, wholeMargin } from './figures';
import { columnsText, type ShownColumn, shownColumns, widthIn } from './set-columns';
import { SetOrders } from './set-orders';

const ROW_PX = { wide: 42, narrow: 60 };
const NARROW_HEIGHT_PX = 520;
const NEAR_TOP_PX = 8;
const MORE_BEFORE_END = 30;
const WIDER_PX = 16;
const MOST_SITES = 5;

/** A row as it is drawn: a coincidence, or one of those that share events with the row above it. */
interface Row {
  readonly set: CoincidenceBrief;
  readonly others: number;
  readonly isOpened: boolean;
  readonly isInner: boolean;
}

/** The coincidences, those that share events folded into one row. */
@Component({
  selector: 'sw-set-table',
  imports: [
    CdkFixedSizeVirtualScroll,
    CdkVirtualForOf,
    CdkVirtualScrollViewport,
    Empty,
    Fault,
    FrameGlyph,
    InstantPipe,
    IntervalDial,
    IntervalMark,
    Skeleton,
  ],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './set-table.html',
  styleUrl: './set-table.scss',
})
export class SetTable {
  private readonly data = inject(DeskEvents);
  private readonly orders = inject(SetOrders);
  protected readonly place = inject(DeskPlace);
  protected readonly lists = inject(DeskLists);
  protected readonly picture = inject(DeskPicture);
  /** The scale in which the first triggers are printed. */
  protected readonly scale = inject(Preferences).scale;
  /** Room that something below the table takes from it, px. */
  readonly lessPx = input(0);
  private readonly host = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly viewport = viewChild(CdkVirtualScrollViewport);
  private readonly opened = signal<ReadonlySet<number>>(new Set());
  private readonly scrolledPx = signal(0);
  private readonly range = signal({ start: 0, end: 16 });
  /** The row where the keyboard is. */
  protected readonly atId = signal(0);
  readonly chosen = output<CoincidenceBrief>();
  readonly opens = output<CoincidenceBrief>();

  protected readonly isNarrow = computed(() => this.picture.room().isNarrow);
  protected readonly rowPx = computed(() => (this.isNarrow() ? ROW_PX.narrow : ROW_PX.wide));
  protected readonly headPx = HEAD_PX;
  protected readonly columns = computed(() => shownColumns(this.place.address().columns, this.data.pinned().map(({ code }) => code))); // prettier-ignore
  protected readonly template = computed(() => this.isNarrow() ? '40px minmax(0, 1fr) auto 34px' : `${this.columns().map(({ widthPx }) => `${widthPx}px`).join(' ')} minmax(28px, 1fr)`); // prettier-ignore
  protected readonly widthPx = computed(() => (this.isNarrow() ? 0 : this.columns().reduce((sum, { widthPx }) => sum + widthPx, 28)));
  protected readonly frameSpeeds = computed(() => new Map(this.data.pinned().map(({ code, resolved }) => [code, resolved?.speedC ?? 0])));
  protected readonly rows = computed<readonly Row[]>(() =>
    this.lists.rows().flatMap(({ first, others }): Row[] => {
      const isOpened = this.opened().has(first.id);
      const row = { set: first, others: others.length, isOpened, isInner: false };
      return isOpened ? [row, ...others.map((set) => ({ set, others: 0, isOpened: false, isInner: true }))] : [row];
    }),
  );
  protected readonly chosenId = computed(() => this.place.address().set ?? 0);
  protected readonly pairsOf = this.orders.pairs;

  /** As high as the diagram, less what stands below it. */
  protected readonly heightPx = computed(() => (this.isNarrow() ? NARROW_HEIGHT_PX : this.picture.heightPx() - this.lessPx()));

  readonly leaders = computed<readonly Leader[]>(() => {
    const [rowOf, scrolled, height] = [this.data.events().rowOf, this.scrolledPx(), this.heightPx()];
    return this.rows()
      .map(({ set, isInner }, i) => ({
        row: isInner ? -1 : (rowOf.get(set.members[0]?.eventId ?? 0) ?? -1),
        y: HEAD_PX + this.rowPx() * (i + 0.5) - scrolled,
      }))
      .filter(({ row, y }) => row >= 0 && y > HEAD_PX && y < height);
  });

  constructor() {
    effect(() => {
      const { start, end } = this.range();
      const seen = this.rows()
        .slice(start, end)
        .map(({ set }) => set);
      const frames = this.data.pinned().map(({ code }) => code);
      untracked(() => this.orders.want(seen, frames));
    });
    effect(() => {
      // Chosen by its mark: its row comes into sight.
      const id = this.chosenId();
      untracked(() => this.show(id));
    });
    // The table may have become lower or higher: measured anew, and the chosen row stays in sight.
    afterRenderEffect(() => {
      this.heightPx();
      untracked(() => {
        this.viewport()?.checkViewportSize();
        if (this.lessPx() > 0) this.show(this.chosenId());
      });
    });
  }

  protected scrolled(): void {
    const viewport = this.viewport();
    if (!viewport) return;
    const px = viewport.measureScrollOffset();
    this.scrolledPx.set(px);
    const start = Math.max(0, Math.floor(px / this.rowPx()) - 2);
    const end = start + Math.ceil(viewport.getViewportSize() / this.rowPx()) + 4;
    this.range.set({ start, end });
    this.lists.isAtEdge.set(px < NEAR_TOP_PX);
    if (end > this.rows().length - MORE_BEFORE_END) void this.lists.more();
  }

  /** Gives the focus to the table, which is at the chosen row. */
  focus(): void {
    this.host.querySelector<HTMLElement>('[role=grid]')?.focus({ preventScroll: true });
  }

  protected toTop(): void {
    this.lists.takeNew();
    this.viewport()?.scrollToIndex(0);
  }

  protected toggle(event: Event, id: number): void {
    event.stopPropagation();
    this.opened.update((opened) => {
      const next = new Set(opened);
      if (!next.delete(id)) next.add(id);
      return next;
    });
  }

  protected sortBy({ sort }: ShownColumn): void {
    if (!sort) return;
    const { sort: now, order } = this.place.address();
    this.place.go({ sort, order: now === sort && order === 'down' ? 'up' : 'down' });
  }

  protected ariaSort({ sort }: ShownColumn): 'ascending' | 'descending' | null {
    const { sort: now, order } = this.place.address();
    if (!sort || sort !== now) return null;
    return order === 'up' ? 'ascending' : 'descending';
  }

  protected beginResize(event: PointerEvent, column: ShownColumn): void {
    const handle = event.currentTarget;
    if (!(handle instanceof HTMLElement)) return;
    event.preventDefault();
    handle.setPointerCapture(event.pointerId);
    const fromPx = event.clientX;
    const move = (moved: PointerEvent): void => this.resize(column, column.widthPx + moved.clientX - fromPx);
    handle.addEventListener('pointermove', move);
    handle.addEventListener('pointerup', () => handle.removeEventListener('pointermove', move), { once: true });
  }

  protected resizeByKey(event: KeyboardEvent, column: ShownColumn): void {
    const by = event.key === 'ArrowRight' ? WIDER_PX : event.key === 'ArrowLeft' ? -WIDER_PX : 0;
    if (by === 0) return;
    event.preventDefault();
    event.stopPropagation();
    this.resize(column, column.widthPx + by);
  }

  private resize({ name }: ShownColumn, px: number): void {
    const columns = this.columns().map((column) => (column.name === name ? { ...column, widthPx: widthIn(px) } : column));
    this.place.move({ columns: columnsText(columns) });
  }

  protected onKey(event: KeyboardEvent): void {
    const rows = this.rows();
    const at = Math.max(0, rows.findIndex(({ set }) => set.id === this.atId())); // prettier-ignore
    const to: Readonly<Record<string, number>> = {
      ArrowDown: at + 1,
      ArrowUp: at - 1,
      PageDown: at + 12,
      PageUp: at - 12,
      Home: 0,
      End: rows.length - 1,
    };
    const next = to[event.key];
    const row = rows[at];
    if (next !== undefined) {
      const id = rows[Math.min(rows.length - 1, Math.max(0, next))]?.set.id ?? 0;
      this.atId.set(id);
      this.show(id);
    } else if (event.key === 'Enter' && row) {
      if (this.chosenId() === row.set.id) this.opens.emit(row.set);
      else this.chosen.emit(row.set);
    } else if ((event.key === ' ' || event.key === 'ArrowRight') && row && row.others > 0) this.toggle(event, row.set.id);
    else return;
    event.preventDefault();
  }

  protected onFocus(): void {
    if (!this.rows().some(({ set }) => set.id === this.atId())) this.atId.set(this.chosenId() || (this.rows()[0]?.set.id ?? 0));
  }

  /** Scrolls only as far as it must. */
  private show(id: number): void {
    const viewport = this.viewport();
    const index = this.rows().findIndex(({ set }) => set.id === id);
    if (!viewport || index < 0) return;
    const [top, size, px] = [viewport.measureScrollOffset(), viewport.getViewportSize(), this.rowPx()];
    if (index * px < top) viewport.scrollToOffset(index * px);
    else if ((index + 1) * px > top + size) viewport.scrollToOffset((index + 1) * px - size);
  }

  protected pick(set: CoincidenceBrief): void {
    this.atId.set(set.id);
    this.chosen.emit(set);
  }

  protected readonly trackId = (_: number, { set, isInner }: Row): string => `${set.id}${isInner ? ' inner' : ''}`;
  protected readonly span = timeText;
  protected readonly lightNs = (distanceM: number): number => distanceM * NS_PER_LIGHT_M;
  protected readonly wholeMarginText = (set: CoincidenceBrief): string => wholeMargin(set.nearestMarginSigma);
  protected readonly marginText = (set: CoincidenceBrief): string => margin(set.nearestMarginSigma);
  protected readonly sitesText = ({ members }: CoincidenceBrief): string =>
    members.slice(0, MOST_SITES).map(({ site }) => site).join(' ') + (members.length > MOST_SITES ? ` +${members.length - MOST_SITES}` : ''); // prettier-ignore
  protected readonly classesText = ({ pairsOf }: CoincidenceBrief): string =>
    (['timelike', 'spacelike', 'undecided'] as const)
      .filter((one) => pairsOf[one] > 0)
      .map((one) => `${pairsOf[one]} ${one}`)
      .join(', ');
}
