import { SITE_STATE_ROUTES } from '#shared/contract/site-state';
import { sitesSeen } from '../accounts/sites-seen';
import { serve, type Served } from '../api/serve';
import { placeOfNetwork } from '../networks/network-rows';
import { siteStatesOf } from './site-states';

/** How the sites of a network do, as the live socket tells it. */
export const siteStateRoutes = (): Served[] => [
  serve(SITE_STATE_ROUTES.readSiteStates, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: ({ params: { networkId }, caller }, ground) => {
      const states = siteStatesOf(ground, networkId);
      const seen = sitesSeen(caller, networkId);
      return { ...states, sites: states.sites.filter(({ siteId }) => seen?.includes(siteId) ?? true) };
    },
  }),
];
