import { CdkMenu, CdkMenuItem, CdkMenuTrigger } from '@angular/cdk/menu';
import {
  afterEveryRender,
  afterNextRender,
  ChangeDetectionStrategy,
  Component,
  computed,
  DestroyRef,
  effect,
  ElementRef,
  inject,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { Router, RouterLink } from '@angular/router';
import { type CoincidenceBrief } from '#shared/contract/coincidence';
import { type IntervalClass } from '#shared/relativity/verdict';
import { CommandStore } from '../commands/command-store';
import { Diagram, type Gesture } from '../diagrams/diagram';
import { MARK_KINDS } from '../diagrams/mark-shape';
import { pngOf, standaloneSvg } from '../diagrams/picture-file';
import { instantText } from '../instants/instant-parts';
import { NetworkStore } from '../networks/network-store';
import { SessionStore } from '../session/session-store';
import { Preferences } from '../preferences/preferences';
import { FrameChoice } from '../frames/frame-choice';
import { Icon } from '../ui/icon';
import { IntervalMark } from '../ui/interval-mark';
import { Empty, Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { ColumnChoice } from './column-choice';
import { type DeskView } from './desk-address';
import { DeskEvents } from './desk-events';
import { csvOf, eventSheet, jsonOf, setSheet } from './desk-export';
import { DeskFrames } from './desk-frames';
import { DeskLists } from './desk-lists';
import { DeskPicture, GUTTER_PX } from './desk-picture';
import { DeskPlace } from './desk-place';
import { DESK_SOURCE, gathered } from './desk-source';
import { EventTable } from './event-table';
import { plain, signed, withUnit } from './figures';
import { LiveDeskSource } from './live-desk-source';
import { saveFile } from './save-file';
import { SetOrders } from './set-orders';
import { SetTable } from './set-table';
import { SiteStrip } from './site-strip';
import { SpeedSlider } from './speed-slider';

const VIEWS: readonly { readonly value: DeskView; readonly word: string; readonly short: string }[] = [
  { value: 'sites', word: 'All sites', short: 'All' },
  { value: 'event', word: 'Around an event', short: 'Event' },
  { value: 'baseline', word: 'Along a baseline', short: 'Baseline' },
];
const SPANS_MS = {
  sites: [1_000, 5_000, 20_000, 60_000, 300_000, 600_000, 3_600_000],
  event: [6, 20, 60, 200, 1_000],
  baseline: [6, 20, 60, 200, 1_000],
} as const;
const FOLDS = [2, 3, 4, 5, 6, 8];
const CHOSEN_PX = 48; // a button in its box: what is said of the chosen coincidence, in one line
const NARROW_PX = 700;
const NEWS_EVERY_MS = 250;
const AT_REST = { speedC: 0, frame: undefined };
const CLASSES = ['spacelike', 'timelike', 'undecided'] as const;

/** The desk: where people watch, and see an order turn. */
@Component({
  selector: 'sw-desk',
  imports: [
    CdkMenu,
    CdkMenuItem,
    CdkMenuTrigger,
    ColumnChoice,
    Diagram,
    Empty,
    EventTable,
    Fault,
    Icon,
    IntervalMark,
    RouterLink,
    SetTable,
    SiteStrip,
    Skeleton,
    SpeedSlider,
  ],
  providers: [DeskPlace, DeskEvents, DeskLists, DeskPicture, DeskFrames, SetOrders, { provide: DESK_SOURCE, useClass: LiveDeskSource }],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './desk.html',
  styleUrl: './desk.scss',
})
export class Desk {
  private readonly router = inject(Router);
  private readonly toasts = inject(ToastStore);
  private readonly preferences = inject(Preferences);
  private readonly orders = inject(SetOrders);
  protected readonly networks = inject(NetworkStore);
  protected readonly session = inject(SessionStore);
  protected readonly place = inject(DeskPlace);
  protected readonly data = inject(DeskEvents);
  protected readonly lists = inject(DeskLists);
  protected readonly picture = inject(DeskPicture);
  private readonly element = inject<ElementRef<HTMLElement>>(ElementRef).nativeElement;
  private readonly work = viewChild<ElementRef<HTMLElement>>('work');
  private readonly eventTable = viewChild(EventTable);
  private readonly setTable = viewChild(SetTable);

  protected readonly pagePx = signal(0);
  protected readonly views = VIEWS;
  protected readonly folds = FOLDS;
  protected readonly gutterPx = GUTTER_PX;
  protected readonly chosenPx = CHOSEN_PX;
  protected readonly view = this.place.address;
  protected readonly isSites = computed(() => this.picture.view() === 'sites');
  protected readonly isBaseline = computed(() => this.picture.view() === 'baseline');
  protected readonly spans = computed(() => {
    const spans: number[] = [...SPANS_MS[this.picture.view()]];
    const now = this.picture.spanMs();
    return (spans.includes(now) ? spans : [...spans, now].sort((a, b) => a - b)).map((ms) => ({ ms, text: spanText(ms) }));
  });
  protected readonly leaders = computed(() =>
    this.picture.room().isNarrow ? [] : (this.setTable()?.leaders() ?? this.eventTable()?.leaders() ?? []),
  );
  protected readonly stressed = computed(() => {
    const other = this.picture.stressedRow();
    return other >= 0 ? [...this.picture.rings(), other] : this.picture.rings();
  });
  protected readonly sitePlaces = computed(() => {
    const { columns } = this.data.events();
    if (this.isSites()) return columns.site;
    // From left to right as they stand in the diagram.
    return this.picture.rest().xMs;
  });
  protected readonly counts = computed(() => {
    const kinds = this.picture.kinds();
    const count = (kind: IntervalClass): number => this.picture.compared().filter((row) => MARK_KINDS[kinds[row] ?? 0] === kind).length;
    return CLASSES.map((kind) => ({ kind, count: count(kind) }));
  });
  protected readonly classes = CLASSES;
  protected readonly atRest = AT_REST;
  protected readonly isPaused = computed(() => this.place.address().until !== undefined);
  protected readonly label = computed(() => {
    const count = this.data.events().columns.count;
    const origin = this.picture.origin();
    if (this.isSites())
      return `${count} triggers of ${this.data.sites().length} sites side by side, time up. The table beside it lists their coincidences.`;
    const what = `${this.picture.compared().length + 1} triggers`;
    if (!this.isBaseline())
      return `${what}; horizontal axis light-time from ${origin?.site ?? ''}, vertical axis time. The table beside it lists the same triggers.`;
    return `${what} along the baseline from ${origin?.site ?? ''} to ${this.picture.other()?.site ?? ''}, in a frame at ${plain(this.picture.speedC(), 3)} c along it. The table beside it lists the same triggers in the same order.`;
  });
  protected readonly chosenSet = computed(() => (this.isSites() ? this.picture.ringedSet() : undefined));
  /** What is said of the event that was chosen beside the one compared with. */
  protected readonly chosenPair = computed(() => {
    const [origin, other] = [this.picture.origin(), this.picture.other()];
    if (this.isSites() || !origin || !other || this.picture.stressedRow() < 0) return undefined;
    const seen = this.picture.book().of(origin.id, other.id);
    const turning = seen?.pair.turning;
    return {
      origin,
      other,
      dt: seen ? withUnit(signed(((seen.isFirst ? 1 : -1) * seen.pair.dtNs) / 1e6, 3), 'ms') : '',
      class: seen?.pair.class,
      turning: turning ? `turns at ${withUnit(turning.speedC.toFixed(3), 'c')}` : '',
    };
  });

  constructor() {
    const destroyed = inject(DestroyRef);
    const source = inject(DESK_SOURCE);
    source.news.pipe(gathered(NEWS_EVERY_MS), takeUntilDestroyed()).subscribe((news) => {
      if (news.hasRecords && !this.isPaused()) {
        this.data.hear(news);
        void this.lists.hear(news);
      }
      if (!news.hasSetup) return;
      void this.networks.sites.load();
      void this.data.frames.load();
      this.data.forgetPairs();
      this.orders.forget();
    });
    effect(() => {
      // Another view without an event: it begins at the strongest coincidence that is listed, else at the latest event.
      const { view, event } = this.place.address();
      if (view === 'sites' || event !== undefined) return;
      const known = this.firstEvent();
      if (known !== undefined) untracked(() => this.place.move({ event: known }));
    });
    effect((onCleanup) => {
      const host = this.work()?.nativeElement;
      if (!host) return;
      const sizes = new ResizeObserver(() => this.measure(host));
      sizes.observe(host);
      sizes.observe(document.body);
      // What stands above the page may come later, and go.
      for (const one of this.element.parentElement?.children ?? []) if (one !== this.element) sizes.observe(one);
      onCleanup(() => sizes.disconnect());
    });
    afterNextRender(() => {
      const measure = (): void => {
        const host = this.work()?.nativeElement;
        if (host) this.measure(host);
      };
      window.addEventListener('resize', measure);
      destroyed.onDestroy(() => window.removeEventListener('resize', measure));
    });
    let before = this.opened();
    let isDue = false;
    afterEveryRender(() => {
      const now = this.opened();
      isDue ||= now !== before;
      before = now;
      if (!isDue) return;
      // Only what was lost is given: what was worked may be there still. What is being read may yet take it away again.
      const isLost = (): boolean => document.activeElement === document.body;
      if (isLost()) this.focusOpened();
      isDue = this.data.isReading() || isLost();
    });
    const frames = inject(DeskFrames);
    inject(FrameChoice).offer(frames.offered);
    inject(CommandStore).offer(() => [
      ...frames.commands(),
      { title: 'Show all sites', section: 'This page', icon: 'radar', key: '1', run: () => this.show('sites') },
      { title: 'Show around an event', section: 'This page', icon: 'radar', key: '2', run: () => this.show('event') },
      { title: 'Show along a baseline', section: 'This page', icon: 'radar', key: '3', run: () => this.show('baseline') },
      { title: 'Back to the geocentric frame', section: 'This page', icon: 'undo', key: '0', run: () => this.place.go(AT_REST) },
      { title: this.isPaused() ? 'Go on live' : 'Pause', section: 'This page', icon: 'pause', key: 'p', run: () => this.pause() },
      { title: 'Copy the link to this view', section: 'This page', icon: 'link', run: () => this.copyLink() },
      { title: 'Export the table as CSV', section: 'This page', icon: 'download', run: () => this.exportTable('csv') },
      { title: 'Export the table as JSON', section: 'This page', icon: 'download', run: () => this.exportTable('json') },
      { title: 'Export the diagram as PNG', section: 'This page', icon: 'download', run: () => this.exportPicture('png') },
      { title: 'Export the diagram as SVG', section: 'This page', icon: 'download', run: () => this.exportPicture('svg') },
    ]);
  }

  protected show(view: DeskView): void {
    const { event } = this.place.address();
    // Each view has a sight of its own.
    const sight = { spanMs: undefined, topMs: undefined, leftMs: undefined, until: undefined };
    if (view !== 'sites' && event === undefined) this.place.go({ view, ...sight, event: this.firstEvent() });
    else this.place.go({ view, ...sight, ...(view === 'sites' && { event: undefined, other: undefined, ...AT_REST }) });
  }

  /** Around the first event of a coincidence, or along its widest pair. */
  protected open(set: CoincidenceBrief, view: DeskView = 'event'): void {
    const [first, last] = [set.members[0], set.members.at(-1)];
    const sight = { spanMs: undefined, topMs: undefined, leftMs: undefined, until: undefined, ...AT_REST };
    this.place.go({ view, event: first?.eventId, other: view === 'baseline' ? last?.eventId : undefined, set: set.id, ...sight });
  }

  protected openPair(a: number, b: number): void {
    void this.router.navigate(['/pair', a, b]);
  }

  protected around(eventId: number): void {
    this.place.go({ view: 'event', event: eventId, other: undefined, set: undefined, topMs: undefined, leftMs: undefined, ...AT_REST });
  }

  /** A mark or row was chosen. */
  protected picked(row: number): void {
    const id = this.data.events().briefs[row]?.id;
    if (this.isSites()) {
      const set = this.lists
        .rows()
        .find(({ first, others }) => [first, ...others].some(({ members }) => members.some(({ eventId }) => eventId === id)));
      if (id === undefined) this.place.go({ set: undefined });
      else if (set) this.place.go({ set: set.first.id });
      else this.around(id);
      return;
    }
    if (id === undefined) this.place.go({ other: undefined });
    else if (row !== this.picture.originRow()) this.place.go({ other: id, ...(this.isBaseline() && { leftMs: undefined }) });
  }

  protected gesture(gesture: Gesture): void {
    this.picture.moveBy(gesture);
  }

  protected pause(): void {
    const origin = this.picture.laneOrigin();
    const wasPaused = this.isPaused();
    this.place.go({ until: wasPaused ? undefined : origin });
    if (wasPaused) void this.lists.renew();
  }

  protected setSpan(ms: number): void {
    this.place.go({ spanMs: ms, topMs: undefined, leftMs: undefined });
  }

  protected async copyLink(): Promise<void> {
    await navigator.clipboard.writeText(window.location.href).then(
      () => this.toasts.say('Link copied.'),
      () => this.toasts.fail('The browser does not let this page copy. Copy the address of the window.'),
    );
  }

  protected exportTable(form: 'csv' | 'json'): void {
    const sheet = this.isSites() ? setSheet(this.lists.part.value()?.items ?? []) : eventSheet(this.comparedEvents());
    const name = this.isSites() ? 'coincidences' : 'triggers';
    if (form === 'csv') saveFile(`${name}.csv`, csvOf(sheet), 'text/csv');
    else saveFile(`${name}.json`, jsonOf(sheet), 'application/json');
    this.toasts.say(`${sheet.rows.length} rows exported as ${form.toUpperCase()}.`);
  }

  protected async exportPicture(form: 'png' | 'svg'): Promise<void> {
    const work = this.work()?.nativeElement;
    const svg = work?.querySelector<SVGSVGElement>('sw-diagram > svg');
    if (!svg) return;
    const canvas = work?.querySelector<HTMLCanvasElement>('sw-diagram > canvas') ?? undefined;
    try {
      if (form === 'svg') saveFile('diagram.svg', standaloneSvg(svg, canvas, this.caption()), 'image/svg+xml');
      else saveFile('diagram.png', await pngOf(svg, canvas, this.caption()), 'image/png');
      this.toasts.say(`Diagram exported as ${form.toUpperCase()}.`);
    } catch {
      this.toasts.fail('The browser could not draw the diagram as a picture. Export it as SVG.');
    }
  }

  private caption(): string[] {
    const origin = this.picture.origin();
    const at = instantText(origin?.at ?? this.picture.laneOrigin(), this.preferences.scale(), 9);
    const network = this.networks.network()?.name ?? '';
    const view = VIEWS.find(({ value }) => value === this.picture.view())?.word ?? '';
    const frame = this.picture.speedC() === 0 ? 'Geocentric frame' : `Frame at ${plain(this.picture.speedC(), 3)} c along the baseline`;
    const what = origin ? `${origin.name} at ${at}` : `up to ${at}`;
    const along = this.isBaseline() ? `, toward ${this.picture.other()?.name ?? ''}` : '';
    return [`${network}. ${view}: ${what}`, `${frame}${along}`, window.location.href.slice(0, 160)];
  }

  private comparedEvents() {
    const { briefs } = this.data.events();
    const { tMs } = this.picture.plane();
    const origin = this.picture.origin();
    return [...this.picture.compared(), this.picture.originRow()]
      .sort((a, b) => (tMs[b] ?? 0) - (tMs[a] ?? 0))
      .flatMap((row) => {
        const brief = briefs[row];
        return brief ? [{ brief, seen: this.picture.book().of(origin?.id ?? 0, brief.id) }] : [];
      });
  }

  /** What is shown, by its name: when it changes the focus may be lost with what it was on. */
  private opened(): string {
    const { view, event } = this.place.address();
    return `${view} ${event ?? ''}`;
  }

  private focusOpened(): void {
    if (!this.isSites()) this.eventTable()?.focusOrigin();
    else if (this.lists.maySee()) this.setTable()?.focus();
    else this.work()?.nativeElement.querySelector<SVGElement>('sw-diagram > svg')?.focus({ preventScroll: true });
  }

  private firstEvent(): number | undefined {
    const chosen = this.lists.part.value()?.items.find(({ id }) => id === this.place.address().set);
    const rows = this.lists.rows().slice(0, 30);
    const best = rows.reduce<CoincidenceBrief | undefined>(
      (most, { first }) => (most && most.fold >= first.fold ? most : first),
      undefined,
    );
    return (chosen ?? best)?.members[0]?.eventId ?? this.data.events().briefs.at(-1)?.id;
  }

  private measure(host: HTMLElement): void {
    const isNarrow = window.innerWidth <= NARROW_PX;
    const { top } = host.getBoundingClientRect();
    const strip = isNarrow ? 0 : (host.nextElementSibling?.clientHeight ?? 0);
    const slider = this.isBaseline() ? 84 : 0;
    const heightPx = Math.max(420, window.innerHeight - (top + window.scrollY) - strip - slider - 18);
    // Down to the lower edge of the window, whatever stands above.
    const page = host.parentElement?.getBoundingClientRect().top ?? 0;
    this.pagePx.set(isNarrow ? 0 : Math.floor(window.innerHeight - (page + window.scrollY)));
    const widthPx = host.clientWidth - (isNarrow ? 16 : 34); // less its padding
    const now = untracked(this.picture.room);
    if (now.widthPx !== widthPx || now.heightPx !== heightPx || now.isNarrow !== isNarrow)
      this.picture.room.set({ widthPx, heightPx, isNarrow });
  }

  protected readonly toNumber = Number;
  protected leastFold(text: string): void {
    this.place.go({ leastFold: text === '' ? undefined : Number(text) });
  }
  protected toggleClass(kind: IntervalClass): void {
    this.place.go({ class: this.view().class === kind ? undefined : kind });
  }
  protected setState(text: string): void {
    this.place.go({ state: text === 'open' || text === 'final' ? text : undefined });
  }
}

function spanText(ms: number): string {
  if (ms < 1_000) return `${Number(ms.toPrecision(3))} ms`;
  if (ms < 60_000) return `${Number((ms / 1_000).toPrecision(3))} s`;
  return ms < 3_600_000 ? `${Number((ms / 60_000).toPrecision(3))} min` : `${Number((ms / 3_600_000).toPrecision(3))} h`;
}
