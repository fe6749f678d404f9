import { and, eq, gt, isNull } from 'drizzle-orm';
import { mailedTokens, people } from '#schema/schema';
import { type Tx } from '../audit/change';
import { type Db } from '../db';
import { utcText } from '../ground';
import { newSecret, secretHash } from './secret-token';

const TOKEN_BITS = 128;
const HOUR_MS = 3600 * 1000;
const LIFE_MS = { invitation: 72 * HOUR_MS, reset: HOUR_MS / 2 } as const;

export type Purpose = keyof typeof LIFE_MS;

/** Makes a token for one purpose, person and use; whatever was made for them before is void. */
export function issueMailedToken(tx: Tx, purpose: Purpose, personId: number, createdBy: number | null, nowMs: number): string {
  voidMailedTokens(tx, personId, nowMs);
  const token = newSecret(TOKEN_BITS);
  tx.insert(mailedTokens)
    .values({
      purpose,
      personId,
      hash: secretHash(token),
      createdAt: utcText(nowMs),
      createdBy,
      expiresAt: utcText(nowMs + LIFE_MS[purpose]),
    })
    .run();
  return token;
}

/** Makes all tokens of a person void. */
export function voidMailedTokens(tx: Tx, personId: number, nowMs: number): void {
  tx.update(mailedTokens)
    .set({ usedAt: utcText(nowMs) })
    .where(and(eq(mailedTokens.personId, personId), isNull(mailedTokens.usedAt)))
    .run();
}

/** The person for whom a token is good now: of this purpose, not used, not expired, its person not disabled. */
export function holderOfMailedToken(db: Pick<Db, 'select'>, purpose: Purpose, token: string, nowMs: number) {
  return db
    .select({ personId: people.id, email: people.email, name: people.name })
    .from(mailedTokens)
    .innerJoin(people, eq(people.id, mailedTokens.personId))
    .where(
      and(
        eq(mailedTokens.hash, secretHash(token)),
        eq(mailedTokens.purpose, purpose),
        isNull(mailedTokens.usedAt),
        gt(mailedTokens.expiresAt, utcText(nowMs)),
        isNull(people.disabledAt),
      ),
    )
    .get();
}
