import { EVENT_ROUTES } from '#shared/contract/event-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { sitesSeen, sitesShown } from '../accounts/sites-seen';
import { absent } from '../api/refusal';
import { serve, type Served } from '../api/serve';
import { coincidencesInBrief } from '../coincidences/coincidence-brief';
import { coincidencesOfEventQuery, type CoincidenceRow } from '../coincidences/coincidence-list';
import { placeOfNetwork } from '../networks/network-rows';
import { atChange, lastChange } from '../search/at-change';
import { partFrom, positionFrom, positionText } from '../search/keyset';
import { rowsOf } from '../search/query';
import { sitesWithin } from '../search/sites-within';
import { eventInFull, placeOfEvent } from './event-in-full';
import { eventListQuery, eventsInBrief, type EventRow } from './event-list';

/** The sort that positions in lists by time name. */
const BY_TIME = 'time';
const TIME_WIDTH = 3;

/** Events of a network, and one with all that it rests on. */
export const eventRoutes = (): Served[] => [
  serve(EVENT_ROUTES.listEvents, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: async ({ params: { networkId }, query, caller }, { db, searcher }) => {
      const { cursor, order = 'up', limit = USUAL_ITEMS, kind, from, to } = query;
      const after = cursor === undefined ? undefined : positionFrom(cursor, BY_TIME, TIME_WIDTH);
      const siteIds = sitesWithin(db, networkId, sitesShown(sitesSeen(caller, networkId), query.siteIds));
      const change = lastChange(db, networkId); // before a search, which reads by itself: it holds at least what there was then
      if (siteIds?.length === 0) return { items: [], next: null, back: null, change };
      const asked = eventListQuery({ networkId, siteIds, kind, from, to, after, order, limit });
      const listed = (found: readonly EventRow[]) => {
        const { items, next, back } = partFrom(found, limit, ({ taiS, ps, id }) => positionText(BY_TIME, [taiS, ps, id]));
        return { items: eventsInBrief(db, items), next, back };
      };
      if (kind === undefined) return atChange(db, networkId, () => listed(rowsOf<EventRow>(db, asked)));
      return { ...listed(await searcher.run<EventRow>({ narrowings: [], walk: asked })), change };
    },
  }),
  serve(EVENT_ROUTES.readEvent, {
    placeOf: ({ params: { eventId } }, { db }) => placeOfEvent(db, eventId),
    handle: ({ params: { eventId } }, { db }) => {
      const event = eventInFull(db, eventId);
      if (!event) throw absent();
      return event;
    },
  }),
  serve(EVENT_ROUTES.listCoincidencesOfEvent, {
    placeOf: ({ params: { eventId } }, { db }) => placeOfEvent(db, eventId),
    handle: ({ params: { eventId }, query: { cursor, order = 'up', limit = USUAL_ITEMS } }, { db }) => {
      const after = cursor === undefined ? undefined : positionFrom(cursor, BY_TIME, TIME_WIDTH);
      const found = rowsOf<CoincidenceRow>(db, coincidencesOfEventQuery({ eventId, after, order, limit }));
      const { items, next, back } = partFrom(found, limit, ({ taiS, ps, id }) => positionText(BY_TIME, [taiS, ps, id]));
      return { items: coincidencesInBrief(db, items), next, back };
    },
  }),
];
