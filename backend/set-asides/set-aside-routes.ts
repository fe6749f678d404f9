import { SET_ASIDE_ROUTES } from '#shared/contract/set-aside-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { sitesSeen, sitesShown } from '../accounts/sites-seen';
import { absent } from '../api/refusal';
import { serve, type Served } from '../api/serve';
import { placeOfNetwork } from '../networks/network-rows';
import { atChange, lastChange } from '../search/at-change';
import { partFrom, positionFrom, positionText } from '../search/keyset';
import { rowsOf } from '../search/query';
import { sitesWithin } from '../search/sites-within';
import { contentsOf } from './set-aside-contents';
import { areFew, positionOf, setAsideListQuery, setAsidesOf, sortOf, widthOf, withoutClock, type SetAsidePlace } from './set-aside-list';

/** Records that could not be accepted. */
export const setAsideRoutes = (): Served[] => [
  serve(SET_ASIDE_ROUTES.listSetAsides, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: async ({ params: { networkId }, query, caller }, { db, searcher }) => {
      const { cursor, order = 'up', limit = USUAL_ITEMS, state = 'open', reason } = query;
      const siteIds = sitesWithin(db, networkId, sitesShown(sitesSeen(caller, networkId), query.siteIds));
      const change = lastChange(db, networkId); // before a search, which reads by itself: it holds at least what there was then
      if (siteIds?.length === 0) return { items: [], next: null, back: null, change };
      const sites = { siteIds };
      const after = cursor === undefined ? undefined : positionFrom(cursor, sortOf(sites), widthOf(sites));
      const { query: asked, isAnswered } = setAsideListQuery({ networkId, siteIds, state, reason, order, after, limit });
      const listed = (found: readonly SetAsidePlace[]) => {
        const { items, next, back } = partFrom(found, limit, (row) => positionText(sortOf(sites), positionOf(sites, row)));
        const ids = items.map(({ id }) => id);
        return { items: setAsidesOf(db, ids).map(({ networkId: _, ...row }) => row), next, back };
      };
      if (isAnswered || areFew(db, siteIds)) return atChange(db, networkId, () => listed(rowsOf<SetAsidePlace>(db, withoutClock(asked))));
      return { ...listed(await searcher.run<SetAsidePlace>({ narrowings: [], walk: asked })), change };
    },
  }),
  serve(SET_ASIDE_ROUTES.readSetAside, {
    placeOf: ({ params: { setAsideId } }, { db }) => {
      const [row] = setAsidesOf(db, [setAsideId]);
      if (!row) return undefined;
      const { networkId, siteId } = row;
      return siteId === null ? { kind: 'network', networkId } : { kind: 'site', networkId, siteId };
    },
    handle: ({ params: { setAsideId }, caller }, { db }) => {
      const [row] = setAsidesOf(db, [setAsideId]);
      // What names no site is nobody's but those who see all of the network.
      if (!row || (row.siteId === null && sitesSeen(caller, row.networkId) !== undefined)) throw absent();
      return { ...row, contents: row.eventId === null ? [] : contentsOf(db, row.eventId) };
    },
  }),
];
