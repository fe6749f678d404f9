import { auditHeadIn } from './audit/audit-head';
import { type Ground } from './ground';
import { originOf, type Sources } from './make-ground';
import { makeSearcher } from './search/searcher';
import { type Facts } from './writer/begin-writer';
import { type Writer } from './writer/questions';

/**
 * Makes what the HTTP thread stands on. Its connection only reads; hashing, mails, the audit trail and the news of commits are the writer's,
 * and using them here is a mistake of ours.
 *
 * @param sources what both threads know, with a reading connection
 * @param facts what the writer said when it was ready
 * @param writer whom the use of keys is told
 */
export function makeReadingGround({ config, db, log, version, port, nowMs }: Sources, facts: Facts, writer: Pick<Writer, 'ask'>): Ground {
  return {
    deploymentId: facts.deploymentId,
    signingKey: facts.signingKey,
    keepsMails: facts.keepsMails,
    db,
    log,
    nowMs,
    version,
    production: config.production,
    origin: originOf(config, port),
    trustedProxies: config.trustedProxies,
    noteKeyUse: (keyId) => {
      writer.ask('site-key:used', { keyId }).catch((fault: unknown) => log.warn({ err: fault }, 'the use of a key was not noted'));
    },
    searcher: makeSearcher(db.$client.name),
    passwords: { hash: writersAlone, matches: writersAlone },
    auditHead: { ...auditHeadIn(config.dataDir), keep: writersAlone },
    onCommitted: writersAlone,
    post: writersAlone,
  };
}

function writersAlone(): never {
  throw new Error('the HTTP thread only reads: this belongs to the writer, where routes by POST and PATCH are answered');
}
