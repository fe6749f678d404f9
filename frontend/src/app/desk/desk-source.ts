import { InjectionToken } from '@angular/core';
import { type Observable } from 'rxjs';
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
