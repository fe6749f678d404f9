import { and, desc, eq, lt } from 'drizzle-orm';
import { SITE_KEY_ROUTES } from '#shared/contract/people-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { networks, siteKeys, sites } from '#schema/schema';
import { pageFrom } from '../api/page';
import { absent, conflict } from '../api/refusal';
import { personOf, serve, type Served } from '../api/serve';
import { change } from '../audit/change';
import { utcText } from '../ground';
import { noteRevoked } from '../writer/commit';
import { actorOf } from './actor';
import { makeSiteKey, SITE_KEY_COLUMNS } from './make-site-key';
import { placeOfSite } from './place-of-site';

/** The keys by which sites send their triggers. */
export const siteKeyRoutes = (): Served[] => [
  serve(SITE_KEY_ROUTES.listSiteKeys, {
    placeOf: ({ params: { siteId } }, { db }) => placeOfSite(db, siteId),
    handle: ({ params: { siteId }, query: { cursor, limit = USUAL_ITEMS } }, { db }) => {
      const found = db
        .select(SITE_KEY_COLUMNS)
        .from(siteKeys)
        .where(and(eq(siteKeys.siteId, siteId), cursor === undefined ? undefined : lt(siteKeys.id, cursor)))
        .orderBy(desc(siteKeys.id))
        .limit(limit + 1)
        .all();
      return pageFrom(found, limit, ({ id }) => id);
    },
  }),
  serve(SITE_KEY_ROUTES.makeSiteKey, {
    placeOf: ({ params: { siteId } }, { db }) => placeOfSite(db, siteId),
    handle: (asked, ground) => {
      const { siteId } = asked.params;
      const createdBy = personOf(asked).personId;
      return change(ground, actorOf(asked), (tx, note) =>
        makeSiteKey(tx, note, { siteId, label: asked.body.label, createdBy }, ground.nowMs()),
      );
    },
  }),
  serve(SITE_KEY_ROUTES.revokeSiteKey, {
    placeOf: ({ params: { siteId } }, { db }) => placeOfSite(db, siteId),
    handle: (asked, ground) => {
      const { siteId, keyId } = asked.params;
      return change(ground, actorOf(asked), (tx, note) => {
        const known = tx
          .select({ networkId: sites.networkId, prefix: siteKeys.prefix, revokedAt: siteKeys.revokedAt })
          .from(siteKeys)
          .innerJoin(sites, eq(sites.id, siteKeys.siteId))
          .where(and(eq(siteKeys.id, keyId), eq(siteKeys.siteId, siteId)))
          .get();
        if (!known) throw absent();
        if (known.revokedAt !== null) throw conflict('The key was revoked already.');
        const revoked = tx
          .update(siteKeys)
          .set({ revokedAt: utcText(ground.nowMs()), revokedBy: personOf(asked).personId })
          .where(eq(siteKeys.id, keyId))
          .returning(SITE_KEY_COLUMNS)
          .get();
        noteRevoked(tx, { kind: 'site-key', keyId, siteId });
        const { networkId, prefix } = known;
        note({ action: 'site-key:revoked', subjectKind: 'site', subjectId: siteId, networkId, details: { keyId, prefix } });
        return revoked;
      });
    },
  }),
  serve(SITE_KEY_ROUTES.readOwnSiteKey, {
    handle: ({ caller }, { db }) => {
      if (caller.kind !== 'site-key') throw new Error('a route for site keys was reached by another');
      const known = db
        .select({ label: siteKeys.label, prefix: siteKeys.prefix, siteCode: sites.code, networkCode: networks.code })
        .from(siteKeys)
        .innerJoin(sites, eq(sites.id, siteKeys.siteId))
        .innerJoin(networks, eq(networks.id, sites.networkId))
        .where(eq(siteKeys.id, caller.keyId))
        .get();
      if (!known) throw absent();
      return known;
    },
  }),
];
