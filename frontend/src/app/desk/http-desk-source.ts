import { inject, Injectable } from '@angular/core';
import { exhaustMap, filter, from, Observable, timer } from 'rxjs';
import { type EventBrief, EVENT_ROUTES } from '#shared/contract/event-routes';
import { STREAM_ROUTES } from '#shared/contract/stream-routes';
import { type Instant } from '#shared/time/instant';
import { ApiClient } from '../api/api-client';
import { type DeskNews, type DeskSource, MOST_SHOWN } from './desk-source';

const ASK_EVERY_MS = 2_000;
const PAGE = 200;
const RECORDS = ['records', 'reprocessed', 'rule'];
const STREAMS = ['completeness', 'set-aside', 'connection'];

/** The desk's events by lists alone: asks every two seconds whether something has changed. */
@Injectable()
export class HttpDeskSource implements DeskSource {
  private readonly api = inject(ApiClient);

  async events(networkId: number, from: Instant, to: Instant): Promise<readonly EventBrief[]> {
    const events: EventBrief[] = [];
    let cursor: string | undefined;
    do {
      const query = { from, to, limit: PAGE, order: 'down' as const, ...(cursor !== undefined && { cursor }) };
      const page = await this.api.call(EVENT_ROUTES.listEvents, { params: { networkId }, query: asText(query) });
      events.push(...page.items);
      cursor = page.next ?? undefined;
    } while (cursor !== undefined && events.length < MOST_SHOWN);
    return events;
  }

  news(networkId: number): Observable<DeskNews> {
    let after: number | undefined;
    const ask = async (): Promise<DeskNews | undefined> => {
      if (document.visibilityState !== 'visible') return undefined;
      try {
        const { items, last } = await this.api.call(STREAM_ROUTES.listChanges, {
          params: { networkId },
          query: { after: after ?? 0, limit: after === undefined ? 1 : PAGE },
        });
        const isFirst = after === undefined;
        after = last;
        if (isFirst || items.length === 0) return undefined;
        const has = (kinds: readonly string[]): boolean => items.some(({ kind }) => kinds.includes(kind));
        return { records: has(RECORDS), streams: true, setup: items.some(({ kind }) => ![...RECORDS, ...STREAMS].includes(kind)) };
      } catch {
        return undefined; // the connection mark says that the server is not reached
      }
    };
    return timer(0, ASK_EVERY_MS).pipe(
      exhaustMap(() => from(ask())),
      filter((news) => news !== undefined),
    );
  }
}

/** Instants of a query as they stand in an address. */
export function asText<Q extends { readonly from?: Instant; readonly to?: Instant }>(query: Q): Q {
  const text = ({ taiS, ps }: Instant): string => `${taiS},${ps}`;
  // The client writes what a query holds as text; the types say what the server reads it as.
  return { ...query, ...(query.from && { from: text(query.from) }), ...(query.to && { to: text(query.to) }) } as unknown as Q;
}
