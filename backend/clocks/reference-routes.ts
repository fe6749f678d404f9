import { and, asc, desc, eq, gt, inArray } from 'drizzle-orm';
import { REFERENCE_ROUTES, type TimeReference } from '#shared/contract/clock-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { timeReferences, timeReferenceVersions } from '#schema/schema';
import { type Place } from '#shared/contract/roles';
import { actorOf } from '../accounts/actor';
import { pageFrom } from '../api/page';
import { absent, stale } from '../api/refusal';
import { serve, type Served } from '../api/serve';
import { change } from '../audit/change';
import { type Db } from '../db';
import { openNetwork, placeOfNetwork } from '../networks/network-rows';
import { noteSetup } from '../networks/note-setup';
import { makeReference, stateSigma } from './make-reference';

type Rows = Pick<Db, 'select'>;

/** What clocks are compared with. */
export const referenceRoutes = (): Served[] => [
  serve(REFERENCE_ROUTES.listReferences, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: ({ params: { networkId }, query: { cursor = 0, limit = USUAL_ITEMS } }, { db }) => {
      const rows = db
        .select()
        .from(timeReferences)
        .where(and(eq(timeReferences.networkId, networkId), gt(timeReferences.id, cursor)))
        .orderBy(asc(timeReferences.id))
        .limit(limit + 1)
        .all();
      return pageFrom(withVersions(db, rows), limit, ({ id }) => id);
    },
  }),
  serve(REFERENCE_ROUTES.makeReference, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: (asked, ground) => {
      const actor = actorOf(asked);
      const { networkId } = asked.params;
      return change(ground, actor, (tx, note) =>
        referenceOfId(tx, makeReference({ tx, note, actor, nowMs: ground.nowMs() }, { networkId, ...asked.body })),
      );
    },
  }),
  serve(REFERENCE_ROUTES.changeReference, {
    placeOf: ({ params: { referenceId } }, { db }) => placeOfReference(db, referenceId),
    handle: (asked, ground) => {
      const actor = actorOf(asked);
      const { referenceId } = asked.params;
      const { name, sigmaNs, note: why = '', version } = asked.body;
      return change(ground, actor, (tx, note) => {
        const before = referenceOfId(tx, referenceId);
        const { networkId } = before;
        openNetwork(tx, networkId);
        if (before.version !== version) throw stale();
        const nowMs = ground.nowMs();
        if (sigmaNs !== undefined) stateSigma({ tx, note, actor, nowMs }, referenceId, sigmaNs, why);
        tx.update(timeReferences)
          .set({ name: name ?? before.name, version: version + 1 })
          .where(eq(timeReferences.id, referenceId))
          .run();
        const details = { sigmaNs: sigmaNs ?? before.sigmaNs };
        note({ action: 'time-reference:changed', subjectKind: 'time-reference', subjectId: referenceId, networkId, details });
        noteSetup(tx, networkId, { what: 'time-reference', id: referenceId }, nowMs);
        return referenceOfId(tx, referenceId);
      });
    },
  }),
];

function placeOfReference(db: Rows, referenceId: number): Place | undefined {
  const row = db.select({ networkId: timeReferences.networkId }).from(timeReferences).where(eq(timeReferences.id, referenceId)).get();
  return row && { kind: 'network', networkId: row.networkId };
}

function referenceOfId(db: Rows, referenceId: number): TimeReference {
  const [found] = withVersions(db, db.select().from(timeReferences).where(eq(timeReferences.id, referenceId)).all());
  if (!found) throw absent();
  return found;
}

function withVersions(db: Rows, rows: readonly (typeof timeReferences.$inferSelect)[]): TimeReference[] {
  const ids = rows.map(({ id }) => id);
  const versions = db
    .select()
    .from(timeReferenceVersions)
    .where(inArray(timeReferenceVersions.referenceId, ids))
    .orderBy(desc(timeReferenceVersions.number))
    .all();
  return rows.map(({ createdBy: _by, ...row }) => {
    const own = versions
      .filter(({ referenceId }) => referenceId === row.id)
      .map(({ referenceId: _of, supersededBy: _who, ...version }) => version);
    const sigmaNs = own.find(({ supersededAt }) => supersededAt === null)?.sigmaNs;
    if (sigmaNs === undefined) throw new Error(`time reference ${row.id} has no version in force`);
    return { ...row, sigmaNs, versions: own };
  });
}
