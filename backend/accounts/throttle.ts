import { createHash } from 'node:crypto';
import { eq, lt, sql } from 'drizzle-orm';
import { failedAttempts } from '#schema/schema';
import { later } from '../api/refusal';
import { utcText, type Ground } from '../ground';
import { addressHolder } from './network-address';

const FORGET_MS = 24 * 3600 * 1000;
const MOST_WAIT_S = 15 * 60;

/** How many failures are free; each one after them doubles the wait, from a second up to a quarter of an hour. */
const FREE = { account: 5, address: 30, 'reset-account': 3, 'reset-address': 30, 'token-address': 30 } as const;

/** What failures are counted under. */
export interface Subject {
  readonly kind: keyof typeof FREE;
  /** The account's e-mail as given, whether it exists or not, or the network address. */
  readonly of: string;
}

type Sources = Pick<Ground, 'db' | 'nowMs'>;

const keyOf = ({ kind, of }: Subject): Buffer =>
  createHash('sha256')
    .update(`${kind}\n${kind.endsWith('address') ? addressHolder(of) : of}`)
    .digest();

/**
 * Counts an attempt as failed before it is tried, so that many at once cannot slip through; a success takes the count back.
 *
 * @param subjects all must be free
 * @returns takes the count of this attempt back
 * @throws Refusal 429 with Retry-After while one of the subjects has to wait
 */
export function countAttempt({ db, nowMs }: Sources, ...subjects: readonly Subject[]): () => void {
  const ms = nowMs();
  const keys = subjects.map((subject) => ({ key: keyOf(subject), free: FREE[subject.kind] }));
  db.transaction(
    (tx) => {
      tx.delete(failedAttempts)
        .where(lt(failedAttempts.lastAt, utcText(ms - FORGET_MS)))
        .run();
      for (const { key } of keys) {
        const waitMs =
          Date.parse(tx.select().from(failedAttempts).where(eq(failedAttempts.subject, key)).get()?.blockedUntil ?? utcText(0)) - ms;
        if (waitMs > 0) throw later(429, 'Too many attempts', 'Too many attempts failed: wait, and try again.', Math.ceil(waitMs / 1000));
      }
      for (const { key, free } of keys) {
        const failures = (tx.select().from(failedAttempts).where(eq(failedAttempts.subject, key)).get()?.failures ?? 0) + 1;
        const waitS = failures <= free ? 0 : Math.min(2 ** Math.min(failures - free - 1, 30), MOST_WAIT_S);
        const counted = { failures, lastAt: utcText(ms), blockedUntil: utcText(ms + waitS * 1000) };
        tx.insert(failedAttempts)
          .values({ subject: key, ...counted })
          .onConflictDoUpdate({ target: failedAttempts.subject, set: counted })
          .run();
      }
    },
    { behavior: 'immediate' },
  );
  return () => {
    for (const { key } of keys)
      db.transaction(
        (tx) => {
          tx.delete(failedAttempts)
            .where(sql`${failedAttempts.subject} = ${key} AND ${failedAttempts.failures} <= 1`)
            .run();
          const back = { failures: sql`${failedAttempts.failures} - 1`, blockedUntil: utcText(ms) };
          tx.update(failedAttempts).set(back).where(eq(failedAttempts.subject, key)).run();
        },
        { behavior: 'immediate' },
      );
  };
}

/** Forgives an account its failures, since its owner has shown that they know the password. */
export function forgive({ db }: Sources, subject: Subject): void {
  db.delete(failedAttempts)
    .where(eq(failedAttempts.subject, keyOf(subject)))
    .run();
}
