import { inject, Injectable } from '@angular/core';
import { map, merge, type Observable } from 'rxjs';
import { type EventBrief, EVENT_ROUTES } from '#shared/contract/event-routes';
import { compareInstants, type Instant, instantOf, picosecondsBetween } from '#shared/time/instant';
import { ApiClient } from '../api/api-client';
import { instantAfter } from '../diagrams/instant-after';
import { LiveStore } from '../live/live-store';
import { type DeskNews, type DeskSource, MOST_SHOWN } from './desk-source';

const PAGE = 200;
const AT_ONCE = 4; // of the six connections that a browser has to a server
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
    const first = await this.page(networkId, from, to, undefined);
    const last = first.items.at(-1);
    if (first.next === null || !last) return first.items;
    // The newest part stands first; a part goes on until it and the newer ones have as many as are shown.
    const parts = slices(from, instantOf(last.at.taiS, last.at.ps + 1)).map((span) => ({ ...span, events: new Array<EventBrief>() }));
    await Promise.all(
      parts.map(async ({ from, to, events }, at) => {
        const upToHere = parts.slice(0, at + 1);
        let cursor: string | undefined;
        do {
          const page = await this.page(networkId, from, to, cursor);
          events.push(...page.items);
          cursor = page.next ?? undefined;
        } while (cursor !== undefined && upToHere.reduce((sum, { events }) => sum + events.length, 0) < MOST_SHOWN);
      }),
    );
    const had = new Set(first.items.map(({ id }) => id)); // at the last one's very instant
    return [...first.items, ...parts.flatMap(({ events }) => events).filter(({ id }) => !had.has(id))].slice(0, MOST_SHOWN);
  }

  private page(networkId: number, from: Instant, to: Instant, cursor: string | undefined) {
    const query = { from: inAddress(from), to: inAddress(to), limit: PAGE, order: 'down', ...(cursor !== undefined && { cursor }) };
    // The client writes what a query holds as text; the types say what the server reads it as.
    return this.api.call(EVENT_ROUTES.listEvents, { params: { networkId }, query: query as never });
  }
}

/** A span in parts that are read at once, the newest first: page after page of a large one would take as many times the way to the server. */
function slices(from: Instant, to: Instant): readonly { readonly from: Instant; readonly to: Instant }[] {
  const ms = picosecondsBetween(from, to) / 1e9;
  const cuts = Array.from({ length: AT_ONCE - 1 }, (_, i) => instantAfter(from, Math.floor((ms * (i + 1)) / AT_ONCE)));
  const ends = [from, ...cuts.filter((cut, i) => compareInstants(cut, cuts[i - 1] ?? from) > 0), to];
  return ends
    .slice(1)
    .map((end, i) => ({ from: ends[i] ?? from, to: end }))
    .reverse();
}

const goes = (...lists: readonly (readonly number[])[]): boolean => lists.some(({ length }) => length > 0);

/** An instant as it stands in an address. */
const inAddress = ({ taiS, ps }: Instant): string => `${taiS},${ps}`;
