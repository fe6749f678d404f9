import { and, eq, sql } from 'drizzle-orm';
import { NETWORK_ROUTES } from '#shared/contract/network-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { DEPLOYMENT } from '#shared/contract/roles';
import { networks } from '#schema/schema';
import { actorOf } from '../accounts/actor';
import { pageFrom } from '../api/page';
import { conflict, stale } from '../api/refusal';
import { personOf, serve, type Served } from '../api/serve';
import { change } from '../audit/change';
import { utcText } from '../ground';
import { timeReader } from '../tables/times-given';
import { makeNetwork } from './make-network';
import { networkOfId, networkRow, networksOf, openNetwork, placeOfNetwork } from './network-rows';
import { noteSetup } from './note-setup';

/** Networks: the deployment's coordinator makes and closes them, each network's own changes its name and what review asks for. */
export const networkRoutes = (): Served[] => [
  serve(NETWORK_ROUTES.listNetworks, {
    handle: (asked, { db }) => {
      const { cursor = 0, limit = USUAL_ITEMS } = asked.query;
      return pageFrom(networksOf(db, personOf(asked).held, cursor, limit + 1), limit, ({ id }) => id);
    },
  }),
  serve(NETWORK_ROUTES.readNetwork, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: ({ params: { networkId } }, { db }) => networkOfId(db, networkId),
  }),
  serve(NETWORK_ROUTES.makeNetwork, {
    placeOf: () => DEPLOYMENT,
    handle: (asked, ground) => {
      const actor = actorOf(asked);
      const { origin, ...values } = asked.body;
      const { read, warnings } = timeReader(ground.db);
      const at = read(origin, 'origin');
      return change(ground, actor, (tx, note) => {
        const id = makeNetwork({ tx, note, actor, nowMs: ground.nowMs() }, { ...values, origin: at });
        return { ...networkOfId(tx, id), warnings };
      });
    },
  }),
  serve(NETWORK_ROUTES.changeNetwork, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: (asked, ground) =>
      change(ground, actorOf(asked), (tx, note) => {
        const { networkId } = asked.params;
        const { version, ...edit } = asked.body;
        const before = openNetwork(tx, networkId);
        const changed = tx
          .update(networks)
          .set({ ...edit, version: sql`${networks.version} + 1` })
          .where(and(eq(networks.id, networkId), eq(networks.version, version)))
          .run();
        if (changed.changes === 0) throw stale();
        const { neededSignatures, needsSecondFactor, staleAboveSigmas } = { ...before, ...edit };
        const details = { neededSignatures, needsSecondFactor, staleAboveSigmas };
        note({ action: 'network:changed', subjectKind: 'network', subjectId: networkId, networkId, details });
        noteSetup(tx, networkId, { what: 'network', id: networkId }, ground.nowMs());
        return networkOfId(tx, networkId);
      }),
  }),
  serve(NETWORK_ROUTES.closeNetwork, {
    placeOf: () => DEPLOYMENT,
    handle: (asked, ground) =>
      change(ground, actorOf(asked), (tx, note) => {
        const { networkId } = asked.params;
        const { version, closedAt } = networkRow(tx, networkId);
        if (version !== asked.body.version) throw stale();
        if (closedAt !== null) throw conflict('The network is closed already.');
        const nowMs = ground.nowMs();
        tx.update(networks)
          .set({ closedAt: utcText(nowMs), version: version + 1 })
          .where(eq(networks.id, networkId))
          .run();
        note({ action: 'network:closed', subjectKind: 'network', subjectId: networkId, networkId });
        noteSetup(tx, networkId, { what: 'network', id: networkId }, nowMs);
        return networkOfId(tx, networkId);
      }),
  }),
];
