import { InjectionToken } from '@angular/core';
import { type Observable } from 'rxjs';
import { type EventBrief } from '#shared/contract/event-routes';
import { type Instant } from '#shared/time/instant';

/** What has changed in a network since the last news. */
export interface DeskNews {
  /** Events or coincidences came, went, or are otherwise. */
  readonly records: boolean;
  /** How far the sites have come. */
  readonly streams: boolean;
  /** Sites, frames, rules or clocks. */
  readonly setup: boolean;
}

/** Where the desk has its events from: what stands in a span, and word of each change. */
export interface DeskSource {
  /** The events of a span, at most `MOST_SHOWN`; `from` belongs to it, `to` does not. */
  events(networkId: number, from: Instant, to: Instant): Promise<readonly EventBrief[]>;
  /** News of a network while someone listens. */
  news(networkId: number): Observable<DeskNews>;
}

/** Most events that the desk holds at once. */
export const MOST_SHOWN = 60_000;

export const DESK_SOURCE = new InjectionToken<DeskSource>('where the desk has its events from');
