import { PAIR_ROUTES, USUAL_SIGMAS } from '#shared/contract/pair-routes';
import { sitesSeen } from '../accounts/sites-seen';
import { absent } from '../api/refusal';
import { serve, type Served } from '../api/serve';
import { placeOfNetwork } from '../networks/network-rows';
import { part, rowsOf, type Query } from '../search/query';
import { setInFull } from './set-in-full';

/** At which sites events that stand lie. */
const sitesOfEventsQuery = (networkId: number, ids: readonly number[]): Query =>
  part(
    'SELECT e.site_id AS siteId FROM json_each(?) i CROSS JOIN events e ON e.trigger_id = i.value WHERE e.network_id = ?',
    JSON.stringify(ids),
    networkId,
  );

/** Every pair of any set of events, computed when it is asked for. */
export const pairRoutes = (): Served[] => [
  serve(PAIR_ROUTES.readPairs, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: ({ params: { networkId }, query, caller }, { db }) => {
      const { sigmas = USUAL_SIGMAS } = query;
      const seen = sitesSeen(caller, networkId);
      const sites = rowsOf<{ siteId: number }>(db, sitesOfEventsQuery(networkId, query.events));
      if (sites.length < query.events.length || sites.some(({ siteId }) => seen?.includes(siteId) === false)) throw absent();
      return setInFull(db, { networkId, eventIds: query.events, frames: query.frames, sigmas });
    },
  }),
];
