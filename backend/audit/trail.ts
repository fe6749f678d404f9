import { and, desc, eq, lt } from 'drizzle-orm';
import { type AuditEntry, AUDIT_ROUTES } from '#shared/contract/record-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { DEPLOYMENT } from '#shared/contract/roles';
import { audit, people } from '#schema/schema';
import { pageFrom } from '../api/page';
import { serve, type Served } from '../api/serve';
import { type Ground } from '../ground';
import { placeOfNetwork } from '../networks/network-rows';
import { checkTrail } from './check-trail';

/** `GET /api/audit`: the trail, newest first; and whether it is what was written. */
export const auditRoutes = (): Served[] => [
  serve(AUDIT_ROUTES.readAudit, {
    placeIn: ({ query: { networkId } }, { db }) => (networkId === undefined ? DEPLOYMENT : placeOfNetwork(db, networkId)),
    handle: ({ query: { cursor, limit = USUAL_ITEMS, networkId, action, actorId, subjectKind, subjectId } }, { db }) => {
      const found = db
        .select({
          seq: audit.seq,
          at: audit.at,
          actorKind: audit.actorKind,
          actorId: audit.actorId,
          actorName: people.name,
          action: audit.action,
          networkId: audit.networkId,
          subjectKind: audit.subjectKind,
          subjectId: audit.subjectId,
          details: audit.details,
          requestId: audit.requestId,
        })
        .from(audit)
        .leftJoin(people, and(eq(audit.actorKind, 'person'), eq(audit.actorId, people.id)))
        .where(
          and(
            cursor === undefined ? undefined : lt(audit.seq, cursor),
            networkId === undefined ? undefined : eq(audit.networkId, networkId),
            action === undefined ? undefined : eq(audit.action, action),
            actorId === undefined ? undefined : and(eq(audit.actorKind, 'person'), eq(audit.actorId, actorId)),
            subjectKind === undefined ? undefined : eq(audit.subjectKind, subjectKind),
            subjectId === undefined ? undefined : eq(audit.subjectId, subjectId),
          ),
        )
        .orderBy(desc(audit.seq))
        .limit(limit + 1)
        .all()
        .map((row) => ({ ...row, details: JSON.parse(row.details) as AuditEntry['details'] }));
      return pageFrom(found, limit, ({ seq }) => seq);
    },
  }),
  serve(AUDIT_ROUTES.verifyAudit, { placeOf: () => DEPLOYMENT, handle: (_asked, ground) => verdictOf(ground) }),
];

/** Checks on their way, by their connection: who asks meanwhile hears of the one that runs. */
const underWay = new WeakMap<Ground['db'], ReturnType<typeof verify>>();

function verdictOf(ground: Ground): ReturnType<typeof verify> {
  const running = underWay.get(ground.db);
  if (running) return running;
  const begun = verify(ground).finally(() => underWay.delete(ground.db));
  underWay.set(ground.db, begun);
  return begun;
}

async function verify(ground: Ground) {
  const verdict = await checkTrail(ground).verdict;
  if (!verdict) throw new Error('a check of the audit trail was stopped');
  const { sound, fault } = verdict;
  return { entries: sound, ok: !fault, ...(fault && { firstBroken: { seq: fault.seq, what: fault.text } }) };
}
