import { COINCIDENCE_SORTS, type CoincidenceSort } from '#shared/contract/coincidence-routes';
import { COINCIDENCE_CLASSES, type CoincidenceBrief } from '#shared/contract/coincidence';
import { type Order, ORDERS } from '#shared/contract/list-query';
import { isCode } from '#shared/reconcile/code';
import { type Instant } from '#shared/time/instant';

/** How the desk shows its events: all sites side by side, around one event, or along a baseline. */
export const DESK_VIEWS = ['sites', 'event', 'baseline'] as const;
export type DeskView = (typeof DESK_VIEWS)[number];

/** Everything of a desk that another who opens its address sees too. What is absent is as usual. */
export interface DeskAddress {
  readonly view: DeskView;
  /** The event around which, or from which on. */
  readonly event?: number;
  /** The event at the other end of the baseline. */
  readonly other?: number;
  /** The chosen coincidence. */
  readonly set?: number;
  /** Speed of the frame along the baseline, in c, with its sign. */
  readonly speedC: number;
  /** Code of the network's frame that the desk is in; the speed is then its own along the baseline. */
  readonly frame?: string;
  /** How much time is shown from bottom to top, ms. */
  readonly spanMs?: number;
  /** What stands at the top and at the left, from the event on, ms; absent in the middle. */
  readonly topMs?: number;
  readonly leftMs?: number;
  /** Where all sites stand still; absent at the live edge. */
  readonly until?: Instant;
  readonly class?: CoincidenceBrief['class'];
  readonly leastFold?: number;
  readonly state?: 'open' | 'final';
  readonly sort: CoincidenceSort;
  readonly order: Order;
  /** Columns of the table of coincidences as `name:width`, in their order; absent as usual. */
  readonly columns?: string;
}

export const MOST_SPEED_C = 0.99;
const MOST_COLUMNS_TEXT = 400;
const MOST_MS = 4e7;

type Read = (name: string) => string | null;

/** What an address says; what cannot be read is as usual. */
export function readDeskAddress(read: Read): DeskAddress {
  const word = <T extends string>(name: string, words: readonly T[]): T | undefined => words.find((one) => one === read(name));
  const id = (name: string): number | undefined => {
    const text = read(name) ?? '';
    return /^[1-9]\d{0,14}$/.test(text) ? Number(text) : undefined;
  };
  const number = (name: string, least: number, most: number): number | undefined => {
    const text = read(name) ?? '';
    const value = Number(text);
    return text !== '' && value >= least && value <= most ? value : undefined;
  };
  const columns = read('columns') ?? '';
  return withoutAbsent({
    view: word('view', DESK_VIEWS) ?? 'sites',
    event: id('event'),
    other: id('other'),
    set: id('set'),
    speedC: number('speed', -MOST_SPEED_C, MOST_SPEED_C) ?? 0,
    frame: isCode(read('frame') ?? '') ? (read('frame') ?? undefined) : undefined,
    spanMs: number('span', 1e-3, MOST_MS),
    topMs: number('top', -MOST_MS, MOST_MS),
    leftMs: number('left', -MOST_MS, MOST_MS),
    until: instantIn(read('until') ?? ''),
    class: word('class', COINCIDENCE_CLASSES),
    leastFold: number('fold', 2, 99),
    state: word('state', ['open', 'final']),
    sort: word('sort', COINCIDENCE_SORTS) ?? 'time',
    order: word('order', ORDERS) ?? 'down',
    columns: /^[\w:,]{1,}$/.test(columns) && columns.length <= MOST_COLUMNS_TEXT ? columns : undefined,
  });
}

/** The same as the fields of an address; null takes a field out of it. */
export function writeDeskAddress(address: DeskAddress): Record<string, string | null> {
  const figure = (value: number | undefined, decimals: number): string | null =>
    value === undefined ? null : String(Number(value.toFixed(decimals)));
  return {
    view: address.view === 'sites' ? null : address.view,
    event: figure(address.event, 0),
    other: figure(address.other, 0),
    set: figure(address.set, 0),
    speed: address.speedC === 0 ? null : figure(address.speedC, 6),
    frame: address.frame ?? null,
    span: figure(address.spanMs, 4),
    top: figure(address.topMs, 4),
    left: figure(address.leftMs, 4),
    until: address.until ? `${address.until.taiS},${address.until.ps}` : null,
    class: address.class ?? null,
    fold: figure(address.leastFold, 0),
    state: address.state ?? null,
    sort: address.sort === 'time' ? null : address.sort,
    order: address.order === 'down' ? null : address.order,
    columns: address.columns ?? null,
  };
}

function instantIn(text: string): Instant | undefined {
  const [, taiS, ps = '0'] = /^(\d{1,11})(?:,(\d{1,12}))?$/.exec(text) ?? [];
  return taiS === undefined ? undefined : { taiS: Number(taiS), ps: Number(ps) };
}

/** A record without the fields that are undefined. */
const withoutAbsent = (fields: { readonly [K in keyof DeskAddress]: DeskAddress[K] | undefined }): DeskAddress =>
  // Only absent fields are left out, and the required ones are never absent.
  Object.fromEntries(Object.entries(fields).filter(([, value]) => value !== undefined)) as unknown as DeskAddress;
