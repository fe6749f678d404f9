import { inject, Injectable } from '@angular/core';
import { map, merge, type Observable } from 'rxjs';
import { type EventBrief, EVENT_ROUTES } from '#shared/contract/event-routes';
import { type Instant } from '#shared/time/instant';
import { ApiClient } from '../api/api-client';
import { LiveStore } from '../live/live-store';
import { type DeskNews, type DeskSource, MOST_SHOWN } from './desk-source';

const PAGE = 200;
const EVERYTHING: DeskNews = { events: undefined, coincidences: undefined, hasRecords: true, hasSetup: true };

/** The desk's events: a span by the list, and what comes after by the live connection. */
@Injectable()
export class LiveDeskSource implements DeskSource {
  private readonly api = inject(ApiClient);
  private readonly live = inject(LiveStore);

  readonly news: Observable<DeskNews> = merge(
    this.live.anew.pipe(map(() => EVERYTHING)),
    this.live.changes.pipe(
      map(({ events, coincidences, hints }): DeskNews => ({
        events: events.isCut ? undefined : events,
        coincidences: coincidences.isCut ? undefined : { items: coincidences.items, gone: coincidences.ended, final: coincidences.final },
        hasRecords:
          [events, coincidences].some(({ items, isCut }) => isCut || items.length > 0) ||
          goes(events.gone, coincidences.ended, coincidences.final),
        hasSetup: hints.some(({ kind }) => kind === 'setup' || kind === 'reprocessed' || kind === 'rule'),
      })),
    ),
  );

  async events(networkId: number, from: Instant, to: Instant): Promise<readonly EventBrief[]> {
    const events: EventBrief[] = [];
    let cursor: string | undefined;
    do {
      const query = { from: inAddress(from), to: inAddress(to), limit: PAGE, order: 'down', ...(cursor !== undefined && { cursor }) };
      // The client writes what a query holds as text; the types say what the server reads it as.
      const page = await this.api.call(EVENT_ROUTES.listEvents, { params: { networkId }, query: query as never });
      events.push(...page.items);
      cursor = page.next ?? undefined;
    } while (cursor !== undefined && events.length < MOST_SHOWN);
    return events;
  }
}

const goes = (...lists: readonly (readonly number[])[]): boolean => lists.some(({ length }) => length > 0);

/** An instant as it stands in an address. */
const inAddress = ({ taiS, ps }: Instant): string => `${taiS},${ps}`;
