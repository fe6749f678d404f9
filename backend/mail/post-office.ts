import { setTimeout as sleep } from 'node:timers/promises';
import { createTransport } from 'nodemailer';
import { type Logger } from 'pino';
import { type Letter } from './letters';

const TRY_AGAIN_AFTER_MS = [1_000, 10_000, 60_000];
const TIMEOUT_MS = 10_000;
const MOST_WAITING = 1_000;

/** Takes letters and sends them in its own time, so that no answer waits for a mail server or tells by its time whether there was a letter. */
export interface PostOffice {
  readonly post: (letter: Letter) => void;
  /** Waits for the letters on their way; none is tried again afterwards. */
  readonly close: () => Promise<void>;
}

/**
 * Opens the way to a mail server.
 *
 * A letter that is not taken is tried again three times within about a minute, and then told in the log as lost: whoever asked for it asks
 * again. Letters are not kept on disk, since their links are secrets that the database holds only as hashes.
 *
 * @param smtpUrl the mail server; smtp:// speaks TLS when the server offers it
 * @param from whom the mails come from
 */
export function postOffice(smtpUrl: string, from: string, log: Logger): PostOffice {
  const transport = createTransport({
    url: smtpUrl,
    connectionTimeout: TIMEOUT_MS,
    greetingTimeout: TIMEOUT_MS,
    socketTimeout: TIMEOUT_MS,
  });
  const onTheirWay = new Set<Promise<void>>();
  const closing = new AbortController();
  const send = async ({ kind, personId, to, subject, text, html }: Letter): Promise<void> => {
    for (let tries = 0; ; tries += 1) {
      try {
        await transport.sendMail({
          from,
          to: { name: '', address: to },
          subject,
          text,
          html,
          disableFileAccess: true,
          disableUrlAccess: true,
        });
        log.info({ event: 'mail:sent', kind, personId }, 'mail sent');
        return;
      } catch (fault) {
        const waitMs = TRY_AGAIN_AFTER_MS[tries];
        const code = fault instanceof Error && 'code' in fault ? String(fault.code) : 'unknown';
        if (waitMs === undefined || closing.signal.aborted) {
          log.error({ event: 'mail:lost', kind, personId, code }, 'mail not sent');
          return;
        }
        log.warn({ event: 'mail:delayed', kind, personId, code, waitMs }, 'mail delayed');
        await sleep(waitMs, undefined, { signal: closing.signal }).catch(() => undefined);
      }
    }
  };
  return {
    post: (letter) => {
      if (onTheirWay.size >= MOST_WAITING) {
        log.error({ event: 'mail:lost', kind: letter.kind, personId: letter.personId, code: 'FULL' }, 'mail not sent');
        return;
      }
      const way = send(letter).finally(() => onTheirWay.delete(way));
      onTheirWay.add(way);
    },
    close: async () => {
      closing.abort();
      await Promise.all(onTheirWay);
      transport.close();
    },
  };
}
