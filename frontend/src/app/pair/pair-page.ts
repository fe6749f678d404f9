import { CdkMenu, CdkMenuItem, CdkMenuTrigger } from '@angular/cdk/menu';
import {
  ChangeDetectionStrategy,
  Component,
  computed,
  effect,
  ElementRef,
  inject,
  input,
  signal,
  untracked,
  viewChild,
} from '@angular/core';
import { Router, RouterLink } from '@angular/router';
import { C_M_S } from '#shared/constants';
import { CommandStore } from '../commands/command-store';
import { margin, plain, signed, timeText, wholeMargin, withUnit } from '../desk/figures';
import { saveFile } from '../desk/save-file';
import { Diagram } from '../diagrams/diagram';
import { IntervalDial } from '../diagrams/interval-dial';
import { NS_PER_MS } from '../diagrams/light-ms';
import { kindNumber } from '../diagrams/mark-shape';
import { OrderBar } from '../diagrams/order-bar';
import { pairPicture, pairScales } from '../diagrams/pair-picture';
import { pngOf, standaloneSvg } from '../diagrams/picture-file';
import { SkyMap } from '../diagrams/sky-map';
import { InstantMark } from '../instants/instant';
import { instantText } from '../instants/instant-parts';
import { NetworkStore } from '../networks/network-store';
import { Preferences } from '../preferences/preferences';
import { PageTitle } from '../shell/page-title';
import { FrameGlyph } from '../ui/frame-glyph';
import { Icon } from '../ui/icon';
import { IntervalMark } from '../ui/interval-mark';
import { Empty, Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { errorBudget, sharedWords } from './error-budget';
import { frameRows } from './frame-rows';
import { intervalSigmaM2, intervalText, lengthText, lightText, smallTimeText, speedText, unitFor } from './pair-figures';
import { neighboursOf, type PairOfIds } from './pair-neighbours';
import { pairJson } from './pair-export';
import { shortNames } from './pair-seen';
import { PairStore } from './pair-store';
import { explanation, verdictSentence } from './pair-words';
import { ReadingSteps } from './reading-steps';

const NARROW_PX = 460;
/** Height of what stands above the speeds at the edge. */
const NOTE_PX = 50;
const MARGINS = { left: 52, top: 6, right: 84, bottom: 44 };
const NARROW_MARGINS = { left: 44, top: 6, right: 62, bottom: 44 };

/** Any two events whatever: what can be said of their order, and what it rests on. */
@Component({
  selector: 'sw-pair-page',
  imports: [
    CdkMenu,
    CdkMenuItem,
    CdkMenuTrigger,
    Diagram,
    Empty,
    Fault,
    FrameGlyph,
    Icon,
    InstantMark,
    IntervalDial,
    IntervalMark,
    OrderBar,
    ReadingSteps,
    RouterLink,
    Skeleton,
    SkyMap,
  ],
  providers: [PairStore],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './pair-page.html',
  styleUrl: './pair-page.scss',
})
export class PairPage {
  private readonly router = inject(Router);
  private readonly toasts = inject(ToastStore);
  private readonly preferences = inject(Preferences);
  private readonly networks = inject(NetworkStore);
  protected readonly store = inject(PairStore);
  private readonly drawing = viewChild<ElementRef<HTMLElement>>('drawing');

  /** From the address: the ids of two events, in either order. */
  readonly eventA = input.required<string>();
  readonly eventB = input.required<string>();
  /** From the query: the coincidence that the page was opened from, and how many standard errors make a decision. */
  readonly set = input<string>();
  readonly sigmas = input<string>();

  private readonly roomPx = signal(0);
  private readonly seen = computed(() => this.store.answers()?.seen);
  protected readonly names = computed<readonly [string, string]>(() => {
    const seen = this.seen();
    return seen ? shortNames(seen) : ['', ''];
  });
  private readonly longNames = computed<readonly [string, string]>(() => {
    const seen = this.seen();
    if (!seen || seen.isOneSite) return this.names();
    return [this.siteName(seen.a.site), this.siteName(seen.b.site)];
  });
  protected readonly verdict = computed(() => {
    const seen = this.seen();
    return seen ? verdictSentence(seen) : '';
  });
  protected readonly words = computed(() => {
    const seen = this.seen();
    return seen ? explanation(seen, ...this.longNames()) : [];
  });
  protected readonly neighbours = computed(() => {
    const { from, seen } = this.store.answers() ?? {};
    return from && seen ? neighboursOf(from, seen.a.id, seen.b.id) : undefined;
  });

  protected readonly rows = computed(() => {
    const { set, seen, frames } = this.store.answers() ?? {};
    return set && seen ? frameRows(set, seen, frames ?? []) : [];
  });
  /** The unit of the table's times: that of the largest. */
  protected readonly unit = computed(() => unitFor(Math.max(0, ...this.rows().map(({ dtNs }) => Math.abs(dtNs)))));
  protected readonly framesOnBar = computed(() => this.rows().map(({ name, alongC }) => ({ name, velocityC: alongC })));

  protected readonly budget = computed(() => {
    const seen = this.seen();
    return seen ? errorBudget(seen.pair, ...this.names()) : [];
  });
  protected readonly shared = computed(() => {
    const seen = this.seen();
    return seen ? sharedWords(seen) : '';
  });

  protected readonly same = computed(() => {
    const seen = this.seen();
    if (!seen) return undefined;
    const { dtNs, distanceM, sigmaDtNs, intervalM2, properDistanceM, properTimeS, terms } = seen.pair;
    const mPerNs = C_M_S / 1e9;
    const sigmaDM = (terms.find(({ name }) => name === 'distance')?.sigmaNs ?? 0) * mPerNs;
    return {
      interval: intervalText(intervalM2, intervalSigmaM2(dtNs * mPerNs, distanceM, sigmaDtNs * mPerNs, sigmaDM)),
      distance: properDistanceM === null ? '' : lightText(properDistanceM),
      distanceM: properDistanceM === null ? '' : lengthText(properDistanceM),
      time: properTimeS === null ? '' : timeText(properTimeS * 1e9),
    };
  });

  protected readonly sky = computed(() => {
    const seen = this.seen();
    if (!seen?.toward) return undefined;
    const sigmaDNs = seen.pair.terms.find(({ name }) => name === 'distance')?.sigmaNs ?? 0;
    return {
      toward: seen.toward,
      dtS: seen.pair.dtNs / 1e9,
      distanceM: seen.pair.distanceM,
      errorDtS: (seen.sigmas * seen.pair.sigmaDtNs) / 1e9,
      errorDistanceM: ((seen.sigmas * sigmaDNs) / 1e9) * C_M_S,
    };
  });

  /** The diagram, as wide as its room and of the height that goes with it. */
  protected readonly diagram = computed(() => {
    const seen = this.seen();
    const widthPx = this.roomPx();
    if (!seen || widthPx < 120) return undefined;
    const isNarrow = widthPx < NARROW_PX;
    const edges = isNarrow ? NARROW_MARGINS : MARGINS;
    const heightPx = Math.round(isNarrow ? widthPx * 0.86 : Math.min(580, widthPx * 1.04));
    const box = {
      left: edges.left,
      top: edges.top,
      width: widthPx - edges.left - edges.right,
      height: heightPx - edges.top - edges.bottom,
    };
    const xMs = seen.lightNs / NS_PER_MS;
    const tMs = seen.pair.dtNs / NS_PER_MS;
    const errorMs = (seen.sigmas * seen.pair.sigmaDtNs) / NS_PER_MS;
    const { x, y } = pairScales(box, xMs, tMs, errorMs);
    const [topMs = 0] = y.domain();
    const { name, ns } = unitFor(topMs * NS_PER_MS, 2);
    const picture = pairPicture({
      box,
      x,
      y,
      unit: { name, ms: ns / NS_PER_MS },
      class: seen.pair.class,
      names: this.names(),
      sites: [seen.a.site, seen.b.site],
      xMs,
      tMs,
      errorMs,
      errorText: `\u00b1 ${timeText(seen.sigmas * seen.pair.sigmaDtNs)} (${withUnit(String(seen.sigmas), '\u03c3')})`,
      turningC: seen.turning?.speedC,
      frames: this.rows(),
    });
    return {
      widthPx,
      heightPx,
      picture,
      hasRoomForNote: !isNarrow && picture.words.every(({ kind, y: at }) => !kind.startsWith('edge') || at > NOTE_PX),
      x,
      y,
      plane: { count: 2, xMs: Float64Array.of(0, xMs), tMs: Float64Array.of(0, tMs) },
      kinds: Uint8Array.of(kindNumber('selected'), kindNumber(seen.pair.class)),
    };
  });
  protected readonly diagramLabel = computed(() => {
    const [a, b] = this.names();
    const where = { spacelike: 'lies outside', timelike: 'lies inside', undecided: 'may lie on either side of' };
    return `${a} and ${b} along their baseline, with lines of simultaneity of ${this.rows().length} frames. ${b} ${where[this.seen()?.pair.class ?? 'undecided']} the light cone of ${a}.`;
  });
  protected readonly sitePlaces = [0, 1] as const;
  protected readonly nameOf = (row: number): string => {
    const seen = this.seen();
    const event = row === 0 ? seen?.a : seen?.b;
    if (!seen || !event) return '';
    const which = row === 0 ? 'the earlier' : `the later, ${seen.pair.class}`;
    return `${event.name} at ${instantText(event.at, this.preferences.scale(), 9)}, \u00b1 ${timeText(event.sigmaNs)}, ${which}`;
  };

  protected readonly margin = margin;
  protected readonly wholeMargin = wholeMargin;
  protected readonly time = smallTimeText;
  protected readonly speed = speedText;

  constructor() {
    const title = inject(PageTitle);
    effect(() => {
      const asked = {
        eventA: Number(this.eventA()),
        eventB: Number(this.eventB()),
        setId: idIn(this.set()),
        sigmas: sigmasIn(this.sigmas()),
      };
      untracked(() => this.store.show(asked));
    });
    effect(() => {
      const seen = this.seen();
      if (seen) title.set(`${seen.a.name} and ${seen.b.name}`);
    });
    effect((onCleanup) => {
      const host = this.drawing()?.nativeElement;
      if (!host) return;
      const sizes = new ResizeObserver(() => this.roomPx.set(host.clientWidth));
      sizes.observe(host);
      onCleanup(() => sizes.disconnect());
    });
    inject(CommandStore).offer(() => {
      if (!this.seen()) return [];
      const { before, behind } = this.neighbours() ?? {};
      return [
        ...(behind
          ? [{ title: 'Next pair of the coincidence', section: 'This page', key: 'j', run: () => this.open(behind) } as const]
          : []),
        ...(before
          ? [{ title: 'Previous pair of the coincidence', section: 'This page', key: 'k', run: () => this.open(before) } as const]
          : []),
        { title: 'Copy the link to this pair', section: 'This page', icon: 'link', run: () => this.copyLink() },
        { title: 'Print this pair', section: 'This page', run: () => this.print() },
        { title: 'Export this pair as JSON', section: 'This page', icon: 'download', run: () => this.exportNumbers() },
        { title: 'Export the diagram as PNG', section: 'This page', icon: 'download', run: () => this.exportPicture('png') },
        { title: 'Export the diagram as SVG', section: 'This page', icon: 'download', run: () => this.exportPicture('svg') },
      ];
    });
  }

  protected siteName(code: string): string {
    const name = this.networks.sites.value()?.find((site) => site.code === code)?.name ?? '';
    return name === '' ? code : name;
  }

  protected turnsAt(): string {
    const turning = this.seen()?.turning;
    if (!turning) return '';
    const decimals = decimalsOf(turning.sigmaC);
    return `${turning.speedC.toFixed(decimals)} \u00b1 ${turning.sigmaC.toFixed(decimals)}`;
  }

  /** A time in the table's unit. */
  protected inUnit(ns: number, withSign: boolean): string {
    const value = ns / this.unit().ns;
    return withSign ? signed(value, 3) : plain(value, 3);
  }

  protected open({ eventA, eventB }: PairOfIds): void {
    void this.router.navigate(['/pair', eventA, eventB], { queryParamsHandling: 'preserve' });
  }

  protected reveal(row: number): void {
    if (row >= 0) document.getElementById(row === 0 ? 'reading-a' : 'reading-b')?.scrollIntoView({ block: 'center' });
  }

  protected async copyLink(): Promise<void> {
    await navigator.clipboard.writeText(window.location.href).then(
      () => this.toasts.say('Link copied.'),
      () => this.toasts.fail('The browser does not let this page copy. Copy the address of the window.'),
    );
  }

  protected print(): void {
    window.print();
  }

  protected exportNumbers(): void {
    const answers = this.store.answers();
    if (!answers) return;
    saveFile(`${this.fileName()}.json`, pairJson(answers, window.location.href), 'application/json');
    this.toasts.say('Pair exported as JSON.');
  }

  protected async exportPicture(form: 'png' | 'svg'): Promise<void> {
    const svg = this.drawing()?.nativeElement.querySelector<SVGSVGElement>('sw-diagram > svg');
    if (!svg) return;
    try {
      if (form === 'svg') saveFile(`${this.fileName()}.svg`, standaloneSvg(svg, undefined, this.caption()), 'image/svg+xml');
      else saveFile(`${this.fileName()}.png`, await pngOf(svg, undefined, this.caption()), 'image/png');
      this.toasts.say(`Diagram exported as ${form.toUpperCase()}.`);
    } catch {
      this.toasts.fail('The browser could not draw the diagram as a picture. Export it as SVG.');
    }
  }

  private fileName(): string {
    const seen = this.seen();
    return `pair-${seen?.a.name ?? ''}-${seen?.b.name ?? ''}`.replace(/[^\w-]+/g, '_');
  }

  private caption(): string[] {
    const seen = this.seen();
    if (!seen) return [];
    const at = instantText(seen.a.at, this.preferences.scale(), 9);
    const network = this.networks.network()?.name ?? '';
    return [
      `${network}. ${seen.a.name} at ${at} and ${seen.b.name}, geocentric frame: ${seen.pair.class}, margin ${wholeMargin(seen.pair.marginSigma)}.`,
      's\u00b2 = (c\u0394t)\u00b2 \u2212 |\u0394x|\u00b2, positive = timelike.',
      window.location.href.slice(0, 160),
    ];
  }
}

const idIn = (text: string | undefined): number | undefined =>
  text !== undefined && /^[1-9]\d{0,14}$/.test(text) ? Number(text) : undefined;

const sigmasIn = (text: string | undefined): number | undefined =>
  text !== undefined && /^\d{1,3}(\.\d{1,6})?$/.test(text) && Number(text) <= 100 ? Number(text) : undefined;

/** So many decimals that an error has two digits that count. */
const decimalsOf = (sigma: number): number => (sigma === 0 ? 3 : Math.min(9, Math.max(3, 1 - Math.floor(Math.log10(sigma)))));
