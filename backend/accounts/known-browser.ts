import { and, eq, gte } from 'drizzle-orm';
import { browserWords } from '#shared/contract/browser-words';
import { sessions } from '#schema/schema';
import { type Tx } from '../audit/change';
import { utcText } from '../ground';
import { keptBrowser } from './sessions';

const LATELY_MS = 30 * 24 * 3600 * 1000;

/**
 * Whether a sign-in comes from a browser in which its person has had no session for 30 days. Browsers are told apart by what people call them,
 * since their versions change each month: who signs in by the same browser on the same system is not noticed. The first sign-in with a
 * password that was chosen lately is never new: its person was written to when it was chosen.
 *
 * @param tx before the new session begins
 * @param userAgent as it came
 * @param passwordSetAt when the person chose their password
 */
export function isNewBrowser(
  tx: Tx,
  { id: personId, passwordSetAt }: { readonly id: number; readonly passwordSetAt: string | null },
  userAgent: string,
  nowMs: number,
): boolean {
  const since = utcText(nowMs - LATELY_MS);
  const used = tx
    .selectDistinct({ browser: sessions.browser })
    .from(sessions)
    .where(and(eq(sessions.personId, personId), gte(sessions.lastUsedAt, since)))
    .all();
  if (used.length === 0 && passwordSetAt !== null && passwordSetAt >= since) return false;
  const words = browserWords(keptBrowser(userAgent));
  return !used.some(({ browser }) => browserWords(browser) === words);
}
