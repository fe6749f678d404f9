import { asc } from 'drizzle-orm';
import { keptMails } from '#schema/schema';
import { type RunningApp } from './app';

const WAIT_MS = 5_000;
const LOOK_MS = 10;

/** The mails to someone so far. */
export const mailsTo = ({ ground }: RunningApp, recipient: string) =>
  ground.db
    .select()
    .from(keptMails)
    .orderBy(asc(keptMails.id))
    .all()
    .filter((mail) => mail.recipient === recipient);

/** Waits until someone has so many mails, and gives them. */
export async function mailedTo(app: RunningApp, recipient: string, count = 1): Promise<ReturnType<typeof mailsTo>> {
  const endMs = performance.now() + WAIT_MS;
  while (mailsTo(app, recipient).length < count) {
    if (performance.now() > endMs)
      throw new Error(`${recipient} got ${mailsTo(app, recipient).length} mails in ${WAIT_MS} ms, not ${count}`);
    await new Promise((resolve) => setTimeout(resolve, LOOK_MS));
  }
  return mailsTo(app, recipient);
}

/** Waits until someone has so many mails, and gives the token of the last one's link. */
export async function tokenMailedTo(app: RunningApp, recipient: string, count = 1): Promise<string> {
  const mails = await mailedTo(app, recipient, count);
  return /#([A-Za-z0-9_-]+)/.exec(mails.at(-1)?.text ?? '')?.[1] ?? 'none';
}
