import { computed, effect, inject, Injectable, signal, untracked } from '@angular/core';
import { AT_REST } from '#shared/relativity/velocity';
import { type Speed, speedFromC } from '#shared/relativity/speed';
import { dot, norm, scale, subtract, type Vec3 } from '#shared/relativity/vector';
import { picosecondsBetween } from '#shared/time/instant';
import { aroundPicture, type SiteAcross } from '../diagrams/around-picture';
import { baselinePicture } from '../diagrams/baseline-picture';
import { type Gesture } from '../diagrams/diagram';
import { turnedWith, turningSpeedAlong } from '../diagrams/frame-orders';
import { lanesPicture, laneScales } from '../diagrams/lanes-picture';
import { kindNumber } from '../diagrams/mark-shape';
import { type Box, oneScale, type Sight, sightAfter } from '../diagrams/one-scale';
import { type Picture } from '../diagrams/picture';
import { alongDirection, aroundEvent, boostPlane, emptyPlane, lightMsBetween, placeOf, type Plane } from '../diagrams/plane';
import { instantParts } from '../instants/instant-parts';
import { Preferences } from '../preferences/preferences';
import { calmly } from '../ui/calmly';
import { DeskEvents, PairBook, USUAL_SPAN_MS } from './desk-events';
import { DeskLists } from './desk-lists';
import { DeskPlace } from './desk-place';
import { firstSpanMs } from './first-span';
import { instantOfRow, kindsAgainst } from './shown-events';

/** Most events in the table beside the event that they are compared with: with it, most whose pairs are computed at once. */
export const MOST_COMPARED = 49;
const USUAL_SIGMAS = 3;
const LIMITS = { leastPxPerMs: 0.02, mostPxPerMs: 4e5 };
const ABOVE = 0.72; // of the box lies above the event: of 60 ms what light needs through the Earth
const EDGE_ROOM = 0.03; // of the span, above the latest event
const LEAST_LEFT = 0.05; // of the width, before the event at one end of a baseline
const LEFT = { sites: 86, sitesNarrow: 78, wide: 64, narrow: 48 };
const TOP_PX = 44;
const BOTTOM_PX = 46;
export const GUTTER_PX = 84;
const LANE_PX = 39;
const AT_MOST_ACROSS = 0.45; // of the page is the diagram's
const TOLD_EVERY_MS = 80;
const AROUND_MS = 43; // light through the Earth and a little more

/** Everything that the diagram and the table beside it draw, computed from what is held, the address and the size. */
@Injectable()
export class DeskPicture {
  private readonly place = inject(DeskPlace);
  private readonly data = inject(DeskEvents);
  private readonly lists = inject(DeskLists);
  private readonly preferences = inject(Preferences);
  /** Room for diagram and table together. */
  readonly room = signal({ widthPx: 0, heightPx: 0, isNarrow: false });

  readonly view = computed(() => this.place.address().view);
  readonly spanMs = computed(() => this.place.address().spanMs ?? this.firstMs() ?? USUAL_SPAN_MS[this.view()]);
  /** Along a baseline, what fits its two ends. */
  private readonly firstMs = computed(() => {
    const row = this.view() === 'baseline' ? this.otherRow() : -1;
    return row < 0 ? undefined : firstSpanMs(this.baselineMs(), this.alongPlane().tMs[row] ?? 0);
  });
  private readonly columns = computed(() => this.data.events().columns);
  readonly book = computed(() => new PairBook(this.data.pairs()));

  private readonly eventId = computed(() => this.place.address().event);
  private readonly otherId = computed(() => this.place.address().other);

  /** The row of the event that the others are compared with; -1 where it is not there. */
  readonly originRow = computed(() => this.data.events().rowOf.get(this.eventId() ?? 0) ?? -1);
  readonly origin = computed(() => (this.originRow() < 0 ? undefined : this.data.events().briefs[this.originRow()]));

  /** The other end of the baseline: what the address says, else of the event's coincidences, else the nearest in time of another site. */
  readonly otherRow = computed(() => {
    const [events, row, event] = [this.data.events(), this.originRow(), this.eventId()];
    const said = events.rowOf.get(this.otherId() ?? 0);
    if (said !== undefined && said !== row) return said;
    if (row < 0) return -1;
    const site = this.columns().site[row];
    const isElsewhere = (candidate: number | undefined): candidate is number =>
      candidate !== undefined && this.columns().site[candidate] !== site;
    const members = (this.data.setsOfEvent.value()?.[0]?.members ?? []).map(({ eventId }) => events.rowOf.get(eventId));
    const member = members.findLast(isElsewhere);
    if (member !== undefined && event !== undefined) return member;
    const rows = Array.from({ length: this.columns().count }, (_, i) => i).filter(isElsewhere);
    const away = (other: number): number => Math.abs(this.aroundPlane().tMs[other] ?? 0);
    return rows.reduce((best, one) => (best < 0 || away(one) < away(best) ? one : best), -1);
  });
  readonly other = computed(() => (this.otherRow() < 0 ? undefined : this.data.events().briefs[this.otherRow()]));
  /** The row that is stressed beside the event: the one that was chosen, and along a baseline always its other end. */
  readonly stressedRow = computed(() => (this.view() === 'baseline' || this.place.address().other !== undefined ? this.otherRow() : -1));

  /** From the event toward the other end, GCRS axes; along x where there is none. */
  private readonly toward = computed<Vec3>(() => {
    const [row, other] = [this.originRow(), this.otherRow()];
    if (row < 0 || other < 0) return [1, 0, 0];
    const step = subtract(placeOf(this.columns(), other), placeOf(this.columns(), row));
    return norm(step) === 0 ? [1, 0, 0] : scale(1 / norm(step), step);
  });
  /** The network's frame that the desk is in, with its speed along the baseline; absent at the slider's own speed. */
  readonly frameShown = computed(() => {
    const code = this.view() === 'baseline' ? this.place.address().frame : undefined;
    return code === undefined ? undefined : this.framesAlong().find((frame) => frame.code === code);
  });
  readonly speedC = computed(() => this.frameShown()?.velocityC ?? this.place.address().speedC);
  readonly speed = computed<Speed>(() => {
    const speed = this.view() === 'baseline' ? speedFromC(this.speedC(), 'speed') : undefined;
    return speed?.ok ? speed.value : { gamma: AT_REST.gamma, gammaBeta: 0 };
  });

  private readonly aroundPlane = computed(() => (this.originRow() < 0 ? emptyPlane(0) : aroundEvent(this.columns(), this.originRow())));
  private readonly alongPlane = computed(() =>
    this.originRow() < 0 ? emptyPlane(0) : alongDirection(this.columns(), this.originRow(), this.toward()),
  );
  private readonly lanePlane = computed<Plane>(() => {
    const { count, taiS, ps, site } = this.columns();
    const from = this.laneOrigin();
    const plane = emptyPlane(count);
    for (let row = 0; row < count; row++) {
      plane.xMs[row] = site[row] ?? 0;
      plane.tMs[row] = ((taiS[row] ?? 0) - from.taiS) * 1e3 + ((ps[row] ?? 0) - from.ps) / 1e9;
    }
    return plane;
  });
  /** Where the geocentric frame places the events. */
  readonly rest = computed(() => {
    const view = this.view();
    return view === 'sites' ? this.lanePlane() : view === 'event' ? this.aroundPlane() : this.alongPlane();
  });
  private readonly moved = computed(() => emptyPlane(this.rest().count));
  /** Where the frame that is shown places them; its columns are those of the last frame, filled anew. */
  readonly plane = computed<Plane>(() => {
    const [rest, speed] = [this.rest(), this.speed()];
    if (speed.gammaBeta === 0) return rest;
    const into = this.moved();
    boostPlane(rest, speed, into);
    return { ...into };
  });

  /** The instant from which all sites' times count. */
  readonly laneOrigin = computed(() => this.place.address().until ?? this.data.edge() ?? { taiS: 0, ps: 0 });

  private readonly size = computed(() => {
    const { widthPx, heightPx, isNarrow } = this.room();
    const isSites = this.view() === 'sites';
    const left = isNarrow ? (isSites ? LEFT.sitesNarrow : LEFT.narrow) : isSites ? LEFT.sites : LEFT.wide;
    const sites = this.data.sites().length;
    if (isNarrow) {
      const width = Math.max(200, widthPx - left - 14);
      const height = this.view() === 'sites' ? width * 1.1 : width * 1.3;
      return { box: { left, top: TOP_PX, width, height }, widthPx, heightPx: height + TOP_PX + BOTTOM_PX };
    }
    const height = Math.max(240, heightPx - TOP_PX - BOTTOM_PX);
    const most = widthPx * AT_MOST_ACROSS - left - GUTTER_PX;
    const wanted =
      this.view() === 'sites' ? sites * LANE_PX : this.view() === 'event' ? (height / USUAL_SPAN_MS.event) * AROUND_MS : height * 0.9;
    const width = Math.round(Math.max(260, Math.min(most, wanted)));
    return { box: { left, top: TOP_PX, width, height }, widthPx: left + width + GUTTER_PX, heightPx: height + TOP_PX + BOTTOM_PX };
  });
  readonly box = computed<Box>(() => this.size().box);
  readonly widthPx = computed(() => this.size().widthPx);
  readonly heightPx = computed(() => this.size().heightPx);

  /** The same object while nothing of it changes: a drag of the slider changes the address, and what stands on this is not computed anew. */
  private readonly sight = computed<Sight>(
    () => {
      const [{ width, height }, spanMs] = [this.box(), this.spanMs()];
      const pxPerMs = height / spanMs;
      const { topMs = spanMs * ABOVE, leftMs } = this.place.address();
      return { pxPerMs, topMs, leftMs: leftMs ?? (this.view() === 'baseline' ? this.baselineLeftMs(width / pxPerMs) : 0) };
    },
    { equal: (a, b) => a.pxPerMs === b.pxPerMs && a.topMs === b.topMs && a.leftMs === b.leftMs },
  );
  readonly scales = computed(() => {
    if (this.view() !== 'sites') return oneScale(this.sight(), this.box());
    const { until, topMs = until ? 0 : this.spanMs() * EDGE_ROOM } = this.place.address();
    return laneScales(this.box(), this.data.sites().length, topMs, this.spanMs());
  });

  /** The coincidence whose events are ringed. */
  readonly ringedSet = computed(() => {
    const chosen = this.place.address().set;
    if (this.view() === 'sites') return this.lists.part.value()?.items.find(({ id }) => id === chosen);
    const sets = this.data.setsOfEvent.value() ?? [];
    return sets.find(({ id }) => id === chosen) ?? sets[0];
  });
  readonly rings = computed(() => (this.ringedSet()?.members ?? []).flatMap(({ eventId }) => this.data.events().rowOf.get(eventId) ?? []));

  /** The rows that are compared with the event, in no order: at the time that is shown, the nearest to it. */
  readonly compared = computed<readonly number[]>(
    () => {
      if (this.view() === 'sites' || this.originRow() < 0) return [];
      const { tMs, count } = this.rest();
      const [topMs = 0, bottomMs = 0] = this.scales().y.domain();
      const rows: number[] = [];
      for (let row = 0; row < count; row++) {
        const at = tMs[row] ?? 0;
        if (row !== this.originRow() && ((at <= topMs && at >= bottomMs) || row === this.stressedRow())) rows.push(row);
      }
      return rows.sort((a, b) => Math.abs(tMs[a] ?? 0) - Math.abs(tMs[b] ?? 0)).slice(0, MOST_COMPARED);
    },
    { equal: (a, b) => a.length === b.length && a.every((row, i) => row === b[i]) },
  );
  /** Whether there are more in what is shown than the table has. */
  readonly isCut = computed(() => this.compared().length === MOST_COMPARED);

  /** Kinds of all marks: what the list tells, and over it what the server says of pairs. */
  readonly kinds = computed(() => {
    const events = this.data.events();
    if (this.view() === 'sites') return new Uint8Array(events.columns.count);
    const row = this.originRow();
    if (row < 0) return new Uint8Array(events.columns.count);
    const kinds = kindsAgainst(events, row, USUAL_SIGMAS);
    const [id, book] = [this.origin()?.id ?? 0, this.book()];
    for (const other of this.compared()) {
      const seen = book.of(id, events.briefs[other]?.id ?? 0);
      if (seen) kinds[other] = kindNumber(seen.pair.class);
    }
    return kinds;
  });
  /** Along a baseline: those of other sites than its two. */
  readonly hollow = computed(() => {
    if (this.view() !== 'baseline') return undefined;
    const { site, count } = this.columns();
    const [a, b] = [site[this.originRow()], site[this.otherRow()]];
    return Uint8Array.from({ length: count }, (_, row) => (site[row] === a || site[row] === b ? 0 : 1));
  });

  /** The speed that the table tells of: during a drag somewhat behind the diagram, since nobody reads figures that change with each frame. */
  readonly toldSpeed = calmly(this.speed, TOLD_EVERY_MS);
  /** The time of a row in the frame that the table tells of, ms from the event. */
  readonly toldMs = computed(() => {
    const [{ tMs, xMs }, { gamma, gammaBeta }] = [this.rest(), this.toldSpeed()];
    return (row: number): number => gamma * (tMs[row] ?? 0) - gammaBeta * (xMs[row] ?? 0);
  });

  /** Which of the compared and the event have changed sides against the geocentric frame, by rows. */
  readonly turned = computed<ReadonlyMap<number, readonly number[]>>(() => {
    if (this.toldSpeed().gammaBeta === 0) return new Map();
    const rows = [...this.compared(), this.originRow()];
    const [rest, mayTurn] = [this.rest(), this.mayTurn()];
    const turned = turnedWith(
      rows.map((row) => rest.tMs[row] ?? 0),
      rows.map(this.toldMs()),
      (a, b) => mayTurn[a * rows.length + b] === 1,
    );
    return new Map(rows.map((row, i) => [row, (turned[i] ?? []).map((j) => rows[j] ?? -1)]));
  });
  private readonly mayTurn = computed(() => {
    const rows = [...this.compared(), this.originRow()];
    const ids = rows.map((row) => this.data.events().briefs[row]?.id ?? 0);
    const book = this.book();
    return Uint8Array.from({ length: rows.length * rows.length }, (_, k) => {
      const [a, b] = [ids[Math.floor(k / rows.length)] ?? 0, ids[k % rows.length] ?? 0];
      return a !== b && book.of(a, b)?.pair.class === 'spacelike' ? 1 : 0;
    });
  });

  /** Turning speeds along the baseline of the spacelike ones, by rows. */
  readonly turnings = computed(() => {
    const { tMs, xMs } = this.alongPlane();
    const [kinds, events] = [this.kinds(), this.data.events()];
    return this.compared().flatMap((row) => {
      if (kinds[row] !== kindNumber('spacelike')) return [];
      const speedC = turningSpeedAlong(tMs[row] ?? 0, xMs[row] ?? 0);
      return speedC === undefined ? [] : [{ row, speedC, site: events.briefs[row]?.site ?? '', isMain: row === this.otherRow() }];
    });
  });
  /**
   * Speeds of the frames in the tables along the baseline: by these alone the pair's order goes. A frame that changes with time is here as
   * soon as the server has said how it is at these events.
   */
  readonly framesAlong = computed(() => {
    const told = new Map(this.data.pairs()?.frames.map(({ code, gamma, gammaBeta }) => [code, scale(1 / gamma, gammaBeta)]));
    const toward = this.toward();
    return this.data.inTables().flatMap(({ code, name, resolved }) => {
      const beta = told.get(code) ?? (resolved?.isConstant ? resolved.betaC : undefined);
      return beta ? [{ code, name, speedC: norm(beta), velocityC: dot(beta, toward) }] : [];
    });
  });
  /** The same as ticks of the slider, the geocentric frame with them; what is too near another to be told from it is left out. */
  readonly framesOnSlider = computed(() => {
    const ticks: { readonly velocityC: number }[] = [{ velocityC: 0 }];
    for (const frame of this.framesAlong())
      if (ticks.every(({ velocityC }) => Math.abs(velocityC - frame.velocityC) > 0.04)) ticks.push(frame);
    return ticks;
  });
  readonly baselineMs = computed(() => this.alongPlane().xMs[this.otherRow()] ?? 0);

  /** A narrow picture has no title up its side: the table says what it would. */
  readonly picture = computed<Picture>(() => (this.room().isNarrow ? { ...this.drawn(), yTitle: '' } : this.drawn()));
  private readonly drawn = computed<Picture>(() => {
    const [view, box, { x, y }] = [this.view(), this.box(), this.scales()];
    const [events, timeScale] = [this.data.events(), this.preferences.scale()];
    if (view === 'sites') {
      const origin = this.laneOrigin();
      const joins = this.joins();
      const codes = this.data.sites().map(({ code }) => code);
      return lanesPicture({
        box,
        x,
        y,
        origin,
        scale: timeScale,
        codes,
        plane: this.plane(),
        joins,
        lightPx: (AROUND_MS * box.height) / this.spanMs(),
      });
    }
    const origin = this.origin();
    if (!origin) return { box, lines: [], words: [], xTicks: [], yTicks: [], xTitle: '', yTitle: '', slanted: false };
    if (view === 'event')
      return aroundPicture({ box, x, y, origin: origin.at, scale: timeScale, site: origin.site, sites: this.sitesAcross() });
    const otherRow = this.otherRow();
    const [rest, shown, kinds, hollow] = [this.rest(), this.plane(), this.kinds(), this.hollow()];
    const compared = this.compared();
    return baselinePicture({
      ...{ box, x, y, speed: this.speed(), from: origin.site, to: this.other()?.site ?? '', rest, shown },
      originName: `${origin.site} .${instantParts(origin.at, timeScale, 3).groups[0] ?? ''}`,
      other:
        otherRow < 0
          ? undefined
          : { xMs: rest.xMs[otherRow] ?? 0, tMs: rest.tMs[otherRow] ?? 0, isSpacelike: kinds[otherRow] === kindNumber('spacelike') },
      trails: compared.filter((row) => row !== otherRow),
      labels: [...compared]
        .sort((a, b) => Number(b === otherRow) - Number(a === otherRow))
        .map((row) => ({ row, code: events.briefs[row]?.site ?? '', isMain: hollow?.[row] !== 1 })),
    });
  });

  /** Of all sites: coincidences whose events are held, joined. */
  private readonly joins = computed(() => {
    const rowOf = this.data.events().rowOf;
    const tMs = this.lanePlane().tMs;
    return this.lists.rows().flatMap(({ first }) => {
      const rows = first.members.flatMap(({ eventId }) => rowOf.get(eventId) ?? []);
      return rows.length < 2 ? [] : [{ kind: first.class, rows: rows.sort((a, b) => (tMs[a] ?? 0) - (tMs[b] ?? 0)) }];
    });
  });

  /** Light-time of each site from the event: of the place where its event nearest in time happened, which is the site's within its turning. */
  private readonly sitesAcross = computed<readonly SiteAcross[]>(() => {
    const [{ columns, sites }, row] = [this.data.events(), this.originRow()];
    const nearest = new Map<number, number>();
    const tMs = this.aroundPlane().tMs;
    for (let i = 0; i < columns.count; i++) {
      const site = columns.site[i] ?? 0;
      const best = nearest.get(site);
      if (best === undefined || Math.abs(tMs[i] ?? 0) < Math.abs(tMs[best] ?? 0)) nearest.set(site, i);
    }
    const from = placeOf(columns, row);
    return sites.flatMap(({ code }, site) => {
      const near = nearest.get(site);
      return near === undefined ? [] : [{ code, xMs: lightMsBetween(from, placeOf(columns, near)) }];
    });
  });

  constructor() {
    effect(() => {
      const [origin, rows, { briefs }] = [this.origin(), this.compared(), this.data.events()];
      this.data.inTables();
      this.data.pairs();
      if (origin) untracked(() => this.data.askPairs([origin.id, ...rows.map((row) => briefs[row]?.id ?? 0)]));
    });
  }

  /** Moves or zooms what is shown. */
  moveBy(gesture: Gesture): void {
    const { from, to } = gesture;
    if (from === to) return;
    if (this.view() === 'sites') {
      this.moveLanes(from, to);
      return;
    }
    const sight = sightAfter(this.sight(), this.box(), from, to, LIMITS);
    const leftMs = this.view() === 'event' ? Math.max(sight.leftMs, -2) : sight.leftMs;
    this.place.move({ spanMs: this.box().height / sight.pxPerMs, topMs: sight.topMs, leftMs });
  }

  private moveLanes(from: Gesture['from'], to: Gesture['to']): void {
    const { y } = this.scales();
    const [top, bottom] = [this.box().top, this.box().top + this.box().height];
    const back = (v: number): number => from.y + (from.k * (v - to.y)) / to.k;
    const [topMs, bottomMs] = [y.invert(back(top)), y.invert(back(bottom))];
    const spanMs = Math.min(2e7, Math.max(20, topMs - bottomMs));
    const origin = this.laneOrigin();
    const edge = this.data.edge() ?? origin;
    const untilPs = Math.round(topMs * 1e9);
    const isAtEdge = picosecondsBetween(edge, origin) + untilPs >= 0 && to.k >= from.k;
    const until = isAtEdge
      ? undefined
      : { taiS: origin.taiS + Math.floor(untilPs / 1e12), ps: untilPs - Math.floor(untilPs / 1e12) * 1e12 };
    this.place.move({ spanMs, until, topMs: undefined });
  }

  private baselineLeftMs(widthMs: number): number {
    const reachMs = this.baselineMs();
    return -Math.max(LEAST_LEFT * widthMs, (widthMs - reachMs) * 0.62);
  }

  /** What a mark is called. */
  readonly nameOf = (row: number): string => {
    const events = this.data.events();
    const brief = events.briefs[row];
    if (!brief) return '';
    const { clock, groups, scale: printed } = instantParts(instantOfRow(events, row), this.preferences.scale(), 6);
    const when = `${clock}.${groups.join('')} ${printed}`;
    const origin = this.origin();
    if (this.view() === 'sites' || !origin || origin.id === brief.id) return `${brief.name}, ${when}`;
    const seen = this.book().of(origin.id, brief.id);
    return `${brief.name}, ${when}${seen ? `, ${seen.pair.class} to ${origin.name}` : ''}`;
  };
}
