import { type Place } from '#shared/contract/roles';
import { SET_ASIDE_ROUTES, type SetAsideAccepting, type SetAsideInFull } from '#shared/contract/set-aside-routes';
import { type SiteRecord } from '#shared/contract/site-record';
import { type Outcome, type Problem } from '#shared/outcome';
import { actorOf } from '../accounts/actor';
import { USUAL_ITEMS } from '#shared/contract/page';
import { sitesSeen, sitesShown } from '../accounts/sites-seen';
import { type Caller } from '../api/caller';
import { absent, conflict, type Refusal, stale, unusable } from '../api/refusal';
import { type Asked, serve, type Served } from '../api/serve';
import { type Db } from '../db';
import { type Ground } from '../ground';
import { acceptSetAside, type DecisionSources, dismissConflict, dismissSetAside } from '../ingest/decisions';
import { partsOf } from '../ingest/parts-of';
import { placeOfNetwork } from '../networks/network-rows';
import { atChange, lastChange } from '../search/at-change';
import { partFrom, positionFrom, positionText } from '../search/keyset';
import { rowsOf } from '../search/query';
import { sitesWithin } from '../search/sites-within';
import { contentsOf, mendedQuery } from './set-aside-contents';
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
    placeOf: ({ params: { setAsideId } }, { db }) => placeOfSetAside(db, setAsideId),
    handle: ({ params: { setAsideId }, caller }, { db }) => seenBy(caller, inFull(db, setAsideId)),
  }),
  serve(SET_ASIDE_ROUTES.acceptSetAside, {
    placeOf: ({ params: { setAsideId } }, { db }) => placeOfSetAside(db, setAsideId),
    handle: (asked, ground) => {
      const { version, why, record } = asked.body;
      return decided(asked, ground, (sources, setAsideId) =>
        acceptSetAside(sources, { setAsideId, version, why }, record && withExtra(record)),
      );
    },
  }),
  serve(SET_ASIDE_ROUTES.dismissSetAside, {
    placeOf: ({ params: { setAsideId } }, { db }) => placeOfSetAside(db, setAsideId),
    handle: (asked, ground) => decided(asked, ground, (sources, setAsideId) => dismissSetAside(sources, { setAsideId, ...asked.body })),
  }),
  serve(SET_ASIDE_ROUTES.dismissConflict, {
    placeOf: ({ params: { setAsideId } }, { db }) => placeOfSetAside(db, setAsideId),
    handle: (asked, ground) => decided(asked, ground, (sources, setAsideId) => dismissConflict(sources, { setAsideId, ...asked.body })),
  }),
];

function placeOfSetAside(db: Pick<Db, '$client'>, setAsideId: number): Place | undefined {
  const [row] = setAsidesOf(db, [setAsideId]);
  if (!row) return undefined;
  const { networkId, siteId } = row;
  return siteId === null ? { kind: 'network', networkId } : { kind: 'site', networkId, siteId };
}

function inFull(db: Pick<Db, '$client'>, setAsideId: number): SetAsideInFull {
  const [row] = setAsidesOf(db, [setAsideId]);
  if (!row) throw absent();
  const mendedEventId = rowsOf<{ id: number }>(db, mendedQuery(setAsideId))[0]?.id ?? null;
  return { ...row, mendedEventId, contents: row.eventId === null ? [] : contentsOf(db, row.eventId) };
}

/** What names no site is nobody's but those who see all of the network. */
function seenBy(caller: Caller, setAside: SetAsideInFull): SetAsideInFull {
  if (setAside.siteId === null && sitesSeen(caller, setAside.networkId) !== undefined) throw absent();
  return setAside;
}

const withExtra = ({ extra, ...record }: NonNullable<SetAsideAccepting['record']>): SiteRecord => ({ ...record, ...(extra && { extra }) });

/** Takes a decision, and tells what came of it; two at once are one behind the other in the writer, and the second finds it stale. */
function decided(
  asked: Asked<{ readonly setAsideId: number }, unknown, unknown>,
  ground: Ground,
  decide: (sources: DecisionSources, setAsideId: number) => Outcome<undefined>,
): SetAsideInFull {
  const { setAsideId } = asked.params;
  if (seenBy(asked.caller, inFull(ground.db, setAsideId)).siteId === null)
    throw conflict('The record names no site that is known: it cannot be decided.');
  const outcome = decide({ ground, parts: partsOf(ground.db), actor: actorOf(asked) }, setAsideId);
  if (!outcome.ok) throw refusalOf(outcome.problem);
  return inFull(ground.db, setAsideId);
}

function refusalOf({ code, where, text }: Problem): Refusal {
  if (code === 'absent') return absent();
  if (code === 'stale') return stale();
  if (code === 'decided' || code === 'identity' || code === 'reason') return conflict(`${where} ${text}`);
  return unusable({ where, text });
}
