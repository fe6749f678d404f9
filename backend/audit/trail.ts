import { and, desc, eq, lt } from 'drizzle-orm';
import { type AuditEntry, AUDIT_ROUTES } from '#shared/contract/record-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { DEPLOYMENT } from '#shared/contract/roles';
import { audit, people } from '#schema/schema';
import { pageFrom } from '../api/page';
import { serve, type Served } from '../api/serve';

/** `GET /api/audit`: the trail, newest first. */
export const auditRoutes = (): Served[] => [
  serve(AUDIT_ROUTES.readAudit, {
    placeOf: ({ query: { networkId } }) => (networkId === undefined ? DEPLOYMENT : { kind: 'network', networkId }),
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
];
