import { ChangeDetectionStrategy, Component, computed, ElementRef, inject, output, signal, viewChild } from '@angular/core';
import { ranksOf } from '../diagrams/frame-orders';
import { IntervalDial } from '../diagrams/interval-dial';
import { NS_PER_LIGHT_M } from '#shared/constants';
import { MARK_KINDS } from '../diagrams/mark-shape';
import { type Leader } from '../diagrams/picture';
import { instantParts } from '../instants/instant-parts';
import { Preferences } from '../preferences/preferences';
import { FrameGlyph } from '../ui/frame-glyph';
import { Icon } from '../ui/icon';
import { IntervalMark } from '../ui/interval-mark';
import { DeskEvents } from './desk-events';
import { DeskPicture } from './desk-picture';
import { margin, plain, signed, wholeMargin, withUnit } from './figures';

export const HEAD_PX = 44;
const ACROSS_C = 1e-9; // of a frame along the baseline, as rounding leaves it
const ROW_PX = { usual: 42, dense: 34 };

/** The events beside the diagram around one of them or along a baseline: newest first, as their marks stand. */
@Component({
  selector: 'sw-event-table',
  imports: [FrameGlyph, Icon, IntervalDial, IntervalMark],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './event-table.html',
  styleUrl: './event-table.scss',
})
export class EventTable {
  private readonly data = inject(DeskEvents);
  private readonly preferences = inject(Preferences);
  private readonly scroller = viewChild.required<ElementRef<HTMLElement>>('scroller');
  protected readonly picture = inject(DeskPicture);
  protected readonly scrolledPx = signal(0);
  readonly picked = output<number>();

  protected readonly isBaseline = computed(() => this.picture.view() === 'baseline');
  protected readonly isMoving = computed(() => this.picture.toldSpeed().gammaBeta !== 0);
  /** Rows in the order of the frame that is shown, the newest first. */
  private readonly rows = computed(() => {
    const toldMs = this.picture.toldMs();
    return [...this.picture.compared(), this.picture.originRow()].filter((row) => row >= 0).sort((a, b) => toldMs(b) - toldMs(a) || b - a);
  });
  protected readonly rowPx = computed(() => {
    const fits = (this.picture.heightPx() - HEAD_PX) / Math.max(1, this.rows().length);
    return fits >= ROW_PX.usual ? ROW_PX.usual : ROW_PX.dense;
  });
  readonly leaders = computed<readonly Leader[]>(() => {
    const [px, scrolled, height] = [this.rowPx(), this.scrolledPx(), this.picture.heightPx()];
    return this.rows()
      .map((row, i) => ({ row, y: HEAD_PX + px * (i + 0.5) - scrolled }))
      .filter(({ y }) => y > HEAD_PX && y < height);
  });

  protected readonly second = computed(() => {
    const origin = this.picture.origin();
    return origin ? instantParts(origin.at, this.preferences.scale(), 9) : undefined;
  });
  protected readonly originWords = computed(() => {
    const origin = this.picture.origin();
    return origin ? `${origin.site} .${this.second()?.groups[0] ?? ''}` : '';
  });
  protected readonly setName = computed(() => this.picture.ringedSet()?.name.slice(0, 6) ?? '');

  /** The pinned frames, what stands in each for every row: its place among all, and whether the event or it comes first. */
  private readonly frameCells = computed(() => {
    const rows = this.rows();
    const origin = this.picture.origin();
    const { briefs } = this.data.events();
    const book = this.picture.book();
    const seen = rows.map((row) => book.of(origin?.id ?? 0, briefs[row]?.id ?? 0));
    return this.frameHeads().map(({ at }) => {
      const times = rows.map((row, i) => {
        const one = seen[i];
        if (row === this.picture.originRow()) return 0;
        return one ? (one.isFirst ? 1 : -1) * (one.pair.orders[at]?.dtNs ?? Number.NaN) : Number.NaN;
      });
      const isWhole = times.every((time) => !Number.isNaN(time));
      const ranks = ranksOf(times);
      return rows.map((_, i) => {
        const one = seen[i];
        const order = one?.pair.orders[at]?.order;
        const leads = order === undefined ? 'self' : order === 'tie' ? 'tie' : (order === 'a') === one?.isFirst ? 'origin' : 'row';
        return { rank: isWhole ? (ranks[i] ?? 0) : undefined, leads };
      });
    });
  });
  /** The geocentric frame and the pinned ones, as the server answered for them: `at` is their place in that answer. */
  protected readonly frameHeads = computed(() => {
    const answered = this.data.pairs()?.frames ?? [];
    const along = new Map(this.picture.framesAlong().map((frame) => [frame.code, frame]));
    return answered.flatMap(({ code }, at) => {
      const frame = along.get(code);
      if (code === 'geocentric') return [{ code, name: 'geocentric', velocityC: 0, at }];
      return frame ? [{ code, name: frame.name || code, velocityC: frame.velocityC, at }] : [];
    });
  });

  protected readonly shown = computed(() => {
    const { briefs } = this.data.events();
    const [rest, toldMs, kinds, turned] = [this.picture.rest(), this.picture.toldMs(), this.picture.kinds(), this.picture.turned()];
    const [origin, book, cells] = [this.picture.origin(), this.picture.book(), this.frameCells()];
    const rings = new Set(this.picture.rings());
    const rows = this.rows();
    const here = ranksOf(rows.map(toldMs));
    const geocentric = cells[0];
    return rows.map((row, i) => {
      const brief = briefs[row];
      const seen = book.of(origin?.id ?? 0, brief?.id ?? 0);
      const pair = seen?.pair;
      const parts = brief ? instantParts(brief.at, this.preferences.scale(), 9) : undefined;
      const sameSecond = parts?.clock === this.second()?.clock;
      const isOrigin = row === this.picture.originRow();
      const rankThere = geocentric?.[i]?.rank;
      const kind = MARK_KINDS[kinds[row] ?? 0] ?? 'plain';
      return {
        row,
        id: brief?.id ?? 0,
        isOrigin,
        isOther: row === this.picture.stressedRow(),
        name: brief?.name ?? '',
        site: brief?.site ?? '',
        lead: sameSecond ? '' : (parts?.clock.slice(6) ?? ''),
        groups: parts?.groups ?? [],
        amplitude: brief?.amplitude?.toFixed(1) ?? '',
        dtMs: isOrigin ? '0' : signed(rest.tMs[row] ?? 0, 3),
        timeHere: isOrigin ? '0' : signed(toldMs(row), 3),
        kind: kind === 'plain' || kind === 'selected' ? undefined : kind,
        dial: pair && {
          dtNs: pair.dtNs,
          lightNs: pair.distanceM * NS_PER_LIGHT_M,
          halfNs: pair.sigmaGapNs * (this.data.pairs()?.sigmas ?? 3),
        },
        margin: pair ? margin(pair.marginSigma) : '',
        wholeMargin: pair ? wholeMargin(pair.marginSigma) : '',
        isRinged: rings.has(row),
        turnedWith: siteList((turned.get(row) ?? []).map((other) => briefs[other]?.site ?? '')),
        hasTurnedWithOrigin: (turned.get(row) ?? []).includes(this.picture.originRow()),
        here: here[i] ?? 0,
        hereLeads: isOrigin ? 'self' : toldMs(row) > 0 ? 'origin' : 'row',
        cells: cells.map((column, k) => {
          const cell = column[i];
          const moved = k === 0 || cell?.rank === undefined || rankThere === undefined ? 0 : cell.rank - rankThere;
          return { ...cell, moved, isTurned: k > 0 && cell?.leads !== geocentric?.[i]?.leads };
        }),
        hereMoved: rankThere === undefined ? 0 : (here[i] ?? 0) - rankThere,
      };
    });
  });
  /** How many pairs of the table have changed their order. */
  protected readonly turnedCount = computed(() => [...this.picture.turned().values()].reduce((sum, rows) => sum + rows.length, 0) / 2);

  /** What has become of the pair along whose baseline the frame moves. */
  protected readonly turnedPair = computed(() => {
    const [row, other] = [this.picture.originRow(), this.picture.otherRow()];
    if (!(this.picture.turned().get(row) ?? []).includes(other)) return '';
    const aheadMs = this.picture.toldMs()(other);
    const [first, second] = aheadMs < 0 ? [this.picture.other(), this.picture.origin()] : [this.picture.origin(), this.picture.other()];
    return `${first?.site ?? ''} now comes ${withUnit(Math.abs(aheadMs).toFixed(3), 'ms')} before ${second?.site ?? ''}.`;
  });

  /** What cannot be drawn of the frame that was chosen: its motion across the baseline. */
  protected readonly offBaseline = computed(() => {
    const frame = this.picture.frameShown();
    if (!frame || frame.speedC - Math.abs(frame.velocityC) < ACROSS_C) return '';
    const [from, to] = [this.picture.origin()?.site ?? '', this.picture.other()?.site ?? ''];
    const speed = (c: number): string => withUnit(plain(c, 4), 'c');
    const { isNarrow } = this.picture.room();
    return (
      `${frame.code} moves at ${speed(frame.speedC)}, ${speed(frame.velocityC)} of it along ${from} to ${to}: the diagram` +
      `${isNarrow ? ' and the times' : ", the times and 'here'"} have that part alone, which gives the order of ${from} and ${to} exactly. ` +
      (isNarrow ? 'A wider window has its exact orders of all.' : `Its exact orders of all stand under ${frame.code}.`)
    );
  });

  protected readonly abs = Math.abs;

  /** Gives the focus to the row of the event that the others are compared with. */
  focusOrigin(): void {
    this.scroller().nativeElement.querySelector<HTMLElement>('tr.chosen')?.focus({ preventScroll: true });
  }

  protected scrolled(): void {
    this.scrolledPx.set(this.scroller().nativeElement.scrollTop);
  }

  protected onKey(event: KeyboardEvent, row: number): void {
    if (event.key === 'Enter' || event.key === ' ') this.picked.emit(row);
    else if (event.key === 'ArrowDown' || event.key === 'ArrowUp') {
      const rows = [...this.scroller().nativeElement.querySelectorAll<HTMLElement>('[data-row]')];
      const at = rows.findIndex((element) => element === event.currentTarget);
      rows[at + (event.key === 'ArrowDown' ? 1 : -1)]?.focus();
    } else return;
    event.preventDefault();
  }
}

const MOST_NAMED = 4;

/** Sites once each; beyond a few that there are more. */
function siteList(sites: readonly string[]): string {
  const once = [...new Set(sites)];
  return once.slice(0, MOST_NAMED).join(' ') + (once.length > MOST_NAMED ? ` +${once.length - MOST_NAMED}` : '');
}
