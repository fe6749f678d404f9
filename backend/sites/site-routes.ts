import { eq } from 'drizzle-orm';
import { USUAL_ITEMS } from '#shared/contract/page';
import { SITE_ROUTES } from '#shared/contract/site-routes';
import { sites } from '#schema/schema';
import { actorOf } from '../accounts/actor';
import { placeOfSite } from '../accounts/place-of-site';
import { pageFrom } from '../api/page';
import { conflict, stale, unusable } from '../api/refusal';
import { personOf, serve, type Served } from '../api/serve';
import { change, type Tx } from '../audit/change';
import { mayKeepTimeBy } from '../clocks/place-of-clock';
import { utcText } from '../ground';
import { openNetwork, placeOfNetwork } from '../networks/network-rows';
import { noteSetup } from '../networks/note-setup';
import { presentOf } from '../tables/present';
import { timeReader } from '../tables/times-given';
import { addSiteState, makeSite } from './make-site';
import { siteOfId, siteRow, sitesAfter } from './site-rows';

/** The sites of a network, and what their readings are reconciled by. */
export const siteRoutes = (): Served[] => [
  serve(SITE_ROUTES.listSites, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: (asked, ground) => {
      const { db } = ground;
      const { cursor = 0, limit = USUAL_ITEMS } = asked.query;
      const { held } = personOf(asked);
      const found = sitesAfter(db, asked.params.networkId, cursor, limit + 1, held, presentOf(ground));
      return pageFrom(found, limit, ({ id }) => id);
    },
  }),
  serve(SITE_ROUTES.readSite, {
    placeOf: ({ params: { siteId } }, { db }) => placeOfSite(db, siteId),
    handle: ({ params: { siteId } }, ground) => siteOfId(ground.db, siteId, presentOf(ground)),
  }),
  serve(SITE_ROUTES.makeSite, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: (asked, ground) => {
      const actor = actorOf(asked);
      const { networkId } = asked.params;
      const times = timeReader(ground.db);
      const state = { ...asked.body.state, from: times.readOrNull(asked.body.state.from, 'state.from') };
      return change(ground, actor, (tx, note) => {
        const { id, warnings } = makeSite({ tx, note, actor, nowMs: ground.nowMs() }, { ...asked.body, networkId, state });
        return { ...siteOfId(tx, id, presentOf(ground)), warnings: [...times.warnings, ...warnings] };
      });
    },
  }),
  serve(SITE_ROUTES.changeSite, {
    placeOf: ({ params: { siteId } }, { db }) => placeOfSite(db, siteId),
    handle: (asked, ground) =>
      change(ground, actorOf(asked), (tx, note) => {
        const { siteId } = asked.params;
        const { version, ...edit } = asked.body;
        const { networkId, closedAt } = unchanged(tx, siteId, version);
        if (closedAt !== null) throw conflict('The site is closed: it is changed no more.');
        tx.update(sites)
          .set({ ...edit, version: version + 1 })
          .where(eq(sites.id, siteId))
          .run();
        note({ action: 'site:changed', subjectKind: 'site', subjectId: siteId, networkId });
        noteSetup(tx, networkId, { what: 'site', id: siteId }, ground.nowMs());
        return siteOfId(tx, siteId, presentOf(ground));
      }),
  }),
  serve(SITE_ROUTES.addSiteVersion, {
    placeOf: ({ params: { siteId } }, { db }) => placeOfSite(db, siteId),
    handle: (asked, ground) => {
      const actor = actorOf(asked);
      const { siteId } = asked.params;
      const { version, replaces, from, ...values } = asked.body;
      const times = timeReader(ground.db);
      const state = { ...values, from: times.readOrNull(from, 'from') };
      return change(ground, actor, (tx, note) => {
        const { networkId } = unchanged(tx, siteId, version);
        if (state.clockId !== null && !mayKeepTimeBy(tx, personOf(asked), networkId, state.clockId))
          throw unusable({
            where: 'clockId',
            text: `is ${state.clockId}; it must be a clock that one of your sites keeps time by, or one that you made and no site keeps time by: a coordinator shares others`,
          });
        const warnings = addSiteState({ tx, note, actor, nowMs: ground.nowMs() }, siteId, state, replaces);
        return { ...siteOfId(tx, siteId, presentOf(ground)), warnings: [...times.warnings, ...warnings] };
      });
    },
  }),
  serve(SITE_ROUTES.closeSite, {
    placeOf: ({ params: { siteId } }, { db }) => placeOfSite(db, siteId),
    handle: (asked, ground) =>
      change(ground, actorOf(asked), (tx, note) => {
        const { siteId } = asked.params;
        const { networkId, version, closedAt } = unchanged(tx, siteId, asked.body.version);
        if (closedAt !== null) throw conflict('The site is closed already.');
        tx.update(sites)
          .set({ closedAt: utcText(ground.nowMs()), version: version + 1 })
          .where(eq(sites.id, siteId))
          .run();
        note({ action: 'site:closed', subjectKind: 'site', subjectId: siteId, networkId });
        noteSetup(tx, networkId, { what: 'site', id: siteId }, ground.nowMs());
        return siteOfId(tx, siteId, presentOf(ground));
      }),
  }),
];

/** The row of a site as the one who asks saw it, in a network that is open. */
function unchanged(tx: Tx, siteId: number, version: number) {
  const row = siteRow(tx, siteId);
  openNetwork(tx, row.networkId);
  if (row.version !== version) throw stale();
  return row;
}
