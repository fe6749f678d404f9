import { type AddressInfo } from 'node:net';
import { lte } from 'drizzle-orm';
import PostalMime from 'postal-mime';
import { type Logger } from 'pino';
import { SMTPServer } from 'smtp-server';
import { keptMails } from '#schema/schema';
import { type Db } from '../db';
import { utcText } from '../ground';

const MOST_BYTES = 64 * 1024;
const MOST_KEPT = 500;
const MOST_RECIPIENTS = 10;

/** The demo's own mail server. */
export interface DemoMailServer {
  readonly smtpUrl: string;
  readonly close: () => Promise<void>;
}

/**
 * Starts a mail server on this machine alone that keeps the mails it takes in the database, the last 500, and sends none on. The links in
 * them let a demo's people in without any mail leaving the machine.
 */
export async function startDemoMailServer(db: Db, log: Logger, nowMs: () => number): Promise<DemoMailServer> {
  const server = new SMTPServer({
    authOptional: true,
    disabledCommands: ['AUTH', 'STARTTLS'],
    disableReverseLookup: true,
    size: MOST_BYTES,
    onRcptTo: (_address, session, done) => {
      done(session.envelope.rcptTo.length < MOST_RECIPIENTS ? null : new Error('too many recipients'));
    },
    onData: (stream, session, done) => {
      const parts: Buffer[] = [];
      let bytes = 0;
      stream.on('data', (part: Buffer) => {
        bytes += part.length;
        if (bytes <= MOST_BYTES) parts.push(part);
      });
      stream.on('end', () => {
        if (bytes > MOST_BYTES) {
          done(new Error(`a mail may have ${MOST_BYTES} bytes`));
          return;
        }
        const recipients = session.envelope.rcptTo.map(({ address }) => address);
        keep(db, Buffer.concat(parts), recipients, nowMs()).then(
          () => done(null),
          (fault: unknown) => {
            log.error({ err: fault }, 'the demo kept no mail');
            done(new Error('not kept'));
          },
        );
      });
    },
  });
  server.on('error', (fault) => log.warn({ err: fault }, "the demo's mail server lost a connection"));
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.server.address() as AddressInfo;
  return {
    smtpUrl: `smtp://127.0.0.1:${port}`,
    close: () => new Promise((resolve) => server.close(resolve)),
  };
}

async function keep(db: Db, raw: Buffer, recipients: readonly string[], nowMs: number): Promise<void> {
  const { from, subject = '', text = '' } = await PostalMime.parse(raw);
  const sender = from?.address ?? 'unknown';
  db.transaction(
    (tx) => {
      for (const recipient of recipients) {
        const { id } = tx
          .insert(keptMails)
          .values({ receivedAt: utcText(nowMs), sender, recipient, subject, text })
          .returning({ id: keptMails.id })
          .get();
        tx.delete(keptMails)
          .where(lte(keptMails.id, id - MOST_KEPT))
          .run();
      }
    },
    { behavior: 'immediate' },
  );
}
