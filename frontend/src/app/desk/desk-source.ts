import { InjectionToken } from '@angular/core';
import { Observable } from 'rxjs';
import { type CoincidenceBrief } from '#shared/contract/coincidence';
import { type EventBrief } from '#shared/contract/event-routes';
import { type Instant } from '#shared/time/instant';

/** Rows that came or are otherwise, and ids of rows that went. */
export interface Rows<Row> {
  readonly items: readonly Row[];
  readonly gone: readonly number[];
}

/** What has changed in a network. */
export interface DeskNews {
  /** Undefined where it is more than could be told: the list is to be read again. */
  readonly events: Rows<EventBrief> | undefined;
  readonly coincidences: (Rows<CoincidenceBrief> & { readonly final: readonly number[] }) | undefined;
  /** Whether events or coincidences are among it. */
  readonly hasRecords: boolean;
  /** Whether sites, frames, rules or clocks are among it. */
  readonly hasSetup: boolean;
}

/** Where the desk has its events from: what stands in a span, and word of each change, so that both together have no gap. */
export interface DeskSource {
  /** The events of a span, at most `MOST_SHOWN`; `from` belongs to it, `to` does not. */
  events(networkId: number, from: Instant, to: Instant): Promise<readonly EventBrief[]>;
  /** News while someone listens. */
  readonly news: Observable<DeskNews>;
}

/** Most events that the desk holds at once. */
export const MOST_SHOWN = 60_000;

export const DESK_SOURCE = new InjectionToken<DeskSource>('where the desk has its events from');

/** Rows with news put over them: what is there by its id takes the place of what was. */
export function withRows<Row extends { readonly id: number }>(rows: readonly Row[], { items, gone }: Rows<Row>): Row[] {
  const over = new Map(items.map((item) => [item.id, item]));
  const left = new Set(gone);
  const known = new Set(rows.map(({ id }) => id));
  return [
    ...rows.filter(({ id }) => !left.has(id) || over.has(id)).map((row) => over.get(row.id) ?? row),
    ...items.filter(({ id }) => !known.has(id)),
  ];
}

/** What two pieces of news come to, the second told after the first. */
export function newsAfter(first: DeskNews, second: DeskNews): DeskNews {
  const [was, is] = [first.coincidences, second.coincidences];
  const told = new Set(is?.items.map(({ id }) => id));
  return {
    events: first.events && second.events && rowsAfter(first.events, second.events),
    coincidences: was && is && { ...rowsAfter(was, is), final: [...was.final.filter((id) => !told.has(id)), ...is.final] },
    hasRecords: first.hasRecords || second.hasRecords,
    hasSetup: first.hasSetup || second.hasSetup,
  };
}

function rowsAfter<Row extends { readonly id: number }>(first: Rows<Row>, second: Rows<Row>): Rows<Row> {
  const over = new Set(second.items.map(({ id }) => id));
  return { items: withRows(first.items, second), gone: [...first.gone.filter((id) => !over.has(id)), ...second.gone] };
}

/**
 * News at most once in a time: the first at once, and what comes until then together, so that a busy network is drawn as often as it can be
 * seen, and not as often as it sends.
 */
export const gathered =
  (everyMs: number) =>
  (news: Observable<DeskNews>): Observable<DeskNews> =>
    new Observable((subscriber) => {
      let waiting: DeskNews | undefined;
      let timer: ReturnType<typeof setTimeout> | undefined;
      const tell = (): void => {
        const told = waiting;
        waiting = undefined;
        timer = told && setTimeout(tell, everyMs);
        if (told) subscriber.next(told);
      };
      const heard = news.subscribe((one) => {
        waiting = waiting ? newsAfter(waiting, one) : one;
        if (timer === undefined) tell();
      });
      return () => {
        heard.unsubscribe();
        clearTimeout(timer);
      };
    });
