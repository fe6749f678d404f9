import { PAIR_ROUTES, type PairsOfSet, USUAL_SIGMAS } from '#shared/contract/pair-routes';
import { type FrameResolver } from '#shared/relativity/frame-resolver';
import { errorTerms } from '#shared/relativity/time-error';
import { type FourVelocity } from '#shared/relativity/velocity';
import { type Instant } from '#shared/time/instant';
import { sitesSeen } from '../accounts/sites-seen';
import { absent, unusable } from '../api/refusal';
import { serve, type Served } from '../api/serve';
import { type Db } from '../db';
import { placeOfNetwork } from '../networks/network-rows';
import { ErrorRows } from '../reconcile/error-rows';
import { eventColumnsOf } from '../reconcile/event-columns';
import { framesInForce } from '../reconcile/frames-in-force';
import { networkInForce } from '../reconcile/network-in-force';
import { part, rowsOf, type Query } from '../search/query';
import { pairsOfSet } from './pairs-of-set';

/** At which sites events that stand lie. */
const sitesOfEventsQuery = (networkId: number, ids: readonly number[]): Query =>
  part(
    'SELECT e.site_id AS siteId FROM json_each(?) i CROSS JOIN events e ON e.trigger_id = i.value WHERE e.network_id = ?',
    JSON.stringify(ids),
    networkId,
  );

/** The frames of a network as they are in force. */
function framesOf(db: Db, networkId: number): FrameResolver {
  const network = networkInForce(db, networkId, new ErrorRows(db));
  if (!network) throw absent();
  const frames = framesInForce(db, network);
  if (!frames.ok) throw new Error(`${frames.problem.where}: ${frames.problem.text}`);
  return frames.value.resolver;
}

/** The velocities of frames at an instant. */
function velocitiesAt(frames: FrameResolver, codes: readonly string[], instant: Instant): FourVelocity[] {
  return codes.map((code) => {
    const velocity = frames.velocityAt(code, instant);
    if (!velocity.ok) throw unusable({ where: 'frames', text: `must be codes of frames: ${velocity.problem.text}` });
    return velocity.value;
  });
}

/** Every pair of any set of events, computed when it is asked for. */
export const pairRoutes = (): Served[] => [
  serve(PAIR_ROUTES.readPairs, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: ({ params: { networkId }, query, caller }, { db }): PairsOfSet => {
      const { sigmas = USUAL_SIGMAS } = query;
      const seen = sitesSeen(caller, networkId);
      const sites = rowsOf<{ siteId: number }>(db, sitesOfEventsQuery(networkId, query.events));
      if (sites.length < query.events.length || sites.some(({ siteId }) => seen?.includes(siteId) === false)) throw absent();
      const { stored, events, errors, names, siteCodes } = eventColumnsOf(db, networkId, query.events);
      const [first] = stored;
      if (!first) throw absent();
      const frames = framesOf(db, networkId);
      const codes = query.frames ?? frames.codes;
      const velocities = velocitiesAt(frames, codes, first);
      return {
        sigmas,
        events: stored.map(({ triggerId, site, taiS, ps, xM, yM, zM, sigmaNs, eventVersion }, row) => ({
          id: triggerId,
          name: names[row] ?? '',
          site: siteCodes[site] ?? '',
          at: { taiS, ps },
          placeM: [xM, yM, zM],
          sigmaNs,
          version: eventVersion,
          terms: [...errorTerms(events, errors, row)],
        })),
        frames: velocities.map(({ gamma, gammaBeta: [x, y, z] }, at) => ({ code: codes[at] ?? '', gamma, gammaBeta: [x, y, z] })),
        pairs: pairsOfSet({ events, errors, sigmas, velocities }),
      };
    },
  }),
];
