import { COINCIDENCE_ROUTES } from '#shared/contract/coincidence-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { absent } from '../api/refusal';
import { serve, type Served } from '../api/serve';
import { placeOfNetwork } from '../networks/network-rows';
import { atChange, lastChange } from '../search/at-change';
import { partFrom, positionFrom, positionText } from '../search/keyset';
import { rowsOf } from '../search/query';
import { sitesWithin } from '../search/sites-within';
import { coincidencesInBrief } from './coincidence-brief';
import { coincidenceInFull, placeOfCoincidence } from './coincidence-in-full';
import { COINCIDENCE_SORTINGS, coincidenceList, type CoincidenceRow, ruleVersionsQuery } from './coincidence-list';

const NONE = { items: [], next: null, back: null };

/** Coincidences in force, by filters and in each of their orders; and any one in full. */
export const coincidenceRoutes = (): Served[] => [
  serve(COINCIDENCE_ROUTES.listCoincidences, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: async ({ params: { networkId }, query }, { db, searcher }) => {
      const { cursor, sort = 'time', order = 'up', limit = USUAL_ITEMS, siteIds = [], ruleId, from, to, leastFold, state, name } = query;
      const { columns, positionOf } = COINCIDENCE_SORTINGS[sort];
      const after = cursor === undefined ? undefined : positionFrom(cursor, sort, columns.length);
      const change = lastChange(db, networkId); // before a search, which reads by itself: it holds at least what there was then
      if (sitesWithin(db, networkId, siteIds)?.length !== siteIds.length) return { ...NONE, change };
      const versions =
        ruleId === undefined ? undefined : rowsOf<{ id: number }>(db, ruleVersionsQuery(networkId, ruleId)).map(({ id }) => id);
      if (versions?.length === 0) return { ...NONE, change };
      const filters = { from, to, class: query.class, leastFold, state, name, siteIds, ruleVersionIds: versions };
      const list = coincidenceList({ networkId, ...filters, sort, order, after, limit });
      const listed = (found: readonly CoincidenceRow[]) => {
        const { items, next, back } = partFrom(found, limit, (row) => positionText(sort, positionOf(row)));
        return { items: coincidencesInBrief(db, items), next, back };
      };
      if (list.kind === 'query') return atChange(db, networkId, () => listed(rowsOf<CoincidenceRow>(db, list.query)));
      return { ...listed(await searcher.run<CoincidenceRow>(list.search)), change };
    },
  }),
  serve(COINCIDENCE_ROUTES.readCoincidence, {
    placeOf: ({ params: { coincidenceId } }, { db }) => placeOfCoincidence(db, coincidenceId),
    handle: ({ params: { coincidenceId } }, { db }) => {
      const coincidence = coincidenceInFull(db, coincidenceId);
      if (!coincidence) throw absent();
      return coincidence;
    },
  }),
];
