import * as z from 'zod';
import { healthAnswer } from './health';
import { record } from './leaves';
import { idText, pageOf, pageQuery } from './page';
import { utc } from './people';
import { route } from './routes';

/** Whether the server and its database answer. */
export const HEALTH_ROUTES = {
  readHealth: route('GET', '/health', {
    policy: 'health:read',
    query: z.looseObject({}, { error: 'an object' }), // whoever watches a server may add what they like, to get past a cache for example
    answer: healthAnswer,
  }),
};

/** One line of the audit trail. */
export const auditEntry = z.strictObject({
  seq: z.int(),
  at: utc(),
  actorKind: z.enum(['person', 'site-key', 'server', 'command']),
  actorId: z.int().nullable(),
  actorName: z.string().nullable(),
  action: z.string(),
  networkId: z.int().nullable(),
  subjectKind: z.string(),
  subjectId: z.string(),
  details: z.record(z.string(), z.json()),
  requestId: z.string().nullable(),
});

const word = (right: string) => z.string({ error: right }).regex(/^[a-z][a-z:-]{0,63}$/, right);

/** Without `networkId` the whole trail, which is the deployment's coordinator's; with it, one network's. Newest first. */
export const AUDIT_ROUTES = {
  readAudit: route('GET', '/audit', {
    policy: 'audit:read',
    query: record({
      ...pageQuery,
      networkId: idText.optional(),
      action: word('an action such as role:given').optional(),
      actorId: idText.optional(),
      subjectKind: word('a kind such as person').optional(),
      subjectId: z.string({ error: 'the id of a subject' }).min(1, 'the id of a subject').max(200, 'the id of a subject').optional(),
    }),
    answer: pageOf(auditEntry),
  }),
  /** Checks the whole trail anew. `entries` are sound up to the first that is altered, missing, inserted, moved or cut off. */
  verifyAudit: route('GET', '/audit/verify', {
    policy: 'audit:verify',
    answer: z.strictObject({
      entries: z.int(),
      ok: z.boolean(),
      firstBroken: z.strictObject({ seq: z.int(), what: z.string() }).optional(),
    }),
  }),
};

/** A mail that the demo's own mail server kept. */
export const keptMail = z.strictObject({
  id: z.int(),
  receivedAt: utc(),
  sender: z.string(),
  recipient: z.string(),
  subject: z.string(),
  text: z.string(),
});

/** Served only where that mail server runs. Newest first. */
export const KEPT_MAIL_ROUTES = {
  listKeptMails: route('GET', '/kept-mails', {
    policy: 'kept-mail:read',
    query: record(pageQuery),
    answer: pageOf(keptMail),
  }),
};

export type AuditEntry = z.infer<typeof auditEntry>;
