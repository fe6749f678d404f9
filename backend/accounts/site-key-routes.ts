import { and, desc, eq, isNull, lt } from 'drizzle-orm';
import { SITE_KEY_ROUTES } from '#shared/contract/people-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { networks, siteKeys, sites } from '#schema/schema';
import { pageFrom } from '../api/page';
import { absent, conflict } from '../api/refusal';
import { personOf, serve, type Served } from '../api/serve';
import { change } from '../audit/change';
import { utcText } from '../ground';
import { actorOf } from './actor';
import { placeOfSite } from './place-of-site';
import { newSiteKey } from './site-key-use';

const MOST_LIVE_KEYS = 20;

const COLUMNS = {
  id: siteKeys.id,
  label: siteKeys.label,
  prefix: siteKeys.prefix,
  createdAt: siteKeys.createdAt,
  lastUsedAt: siteKeys.lastUsedAt,
  revokedAt: siteKeys.revokedAt,
};

/** The keys by which sites send their triggers. */
export const siteKeyRoutes = (): Served[] => [
  serve(SITE_KEY_ROUTES.listSiteKeys, {
    placeOf: ({ params: { siteId } }, { db }) => placeOfSite(db, siteId),
    handle: ({ params: { siteId }, query: { cursor, limit = USUAL_ITEMS } }, { db }) => {
      const found = db
        .select(COLUMNS)
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
      return change(ground, actorOf(asked), (tx, note) => {
        const { networkId } = tx.select({ networkId: sites.networkId }).from(sites).where(eq(sites.id, siteId)).get() ?? {
          networkId: null,
        };
        const live = tx
          .select({ id: siteKeys.id })
          .from(siteKeys)
          .where(and(eq(siteKeys.siteId, siteId), isNull(siteKeys.revokedAt)))
          .all();
        if (live.length >= MOST_LIVE_KEYS) throw conflict(`The site has ${MOST_LIVE_KEYS} keys: revoke one first.`);
        const { key, prefix, hash } = newSiteKey();
        const made = tx
          .insert(siteKeys)
          .values({
            siteId,
            label: asked.body.label,
            prefix,
            hash,
            createdAt: utcText(ground.nowMs()),
            createdBy: personOf(asked).personId,
          })
          .returning(COLUMNS)
          .get();
        note({ action: 'site-key:made', subjectKind: 'site', subjectId: siteId, networkId, details: { keyId: made.id, prefix } });
        return { ...made, key };
      });
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
          .returning(COLUMNS)
          .get();
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
