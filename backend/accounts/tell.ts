import { eq } from 'drizzle-orm';
import { OPTIONAL_MAILS } from '#shared/contract/mail-kinds';
import { type HeldRole } from '#shared/contract/roles';
import { networks, sites } from '#schema/schema';
import { type Db } from '../db';
import { utcText, type Ground } from '../ground';
import { type Letter } from '../mail/letters';
import { type Noticed, type RoleHappening, roleNotice } from '../mail/notices';
import { rowOf } from './people-rows';
import { wantsMail } from './preference-rows';

type Sources = Pick<Ground, 'db' | 'nowMs' | 'origin' | 'post'>;

/**
 * Tells a person by mail of what is committed, unless it is of a kind that they do not want, or they cannot sign in (disabled, or not yet in).
 *
 * @param letterTo writes the letter; its kind says whether they may do without it
 */
export function tell({ db, nowMs, origin, post }: Sources, personId: number, letterTo: (noticed: Noticed) => Letter): void {
  const { email, name, disabledAt, passwordHash } = rowOf(db, personId);
  if (disabledAt !== null || passwordHash === null) return;
  const letter = letterTo({ receiver: { personId, email, name }, origin, at: utcText(nowMs()) });
  const optional = OPTIONAL_MAILS.find(({ kind }) => kind === letter.kind);
  if (!optional || wantsMail(db, personId, optional.kind)) post(letter);
}

/** Tells a person what somebody else did with a role of theirs. */
export function tellOfRole(
  ground: Sources,
  { personId, by }: { readonly personId: number; readonly by: number },
  what: RoleHappening,
  held: HeldRole & { readonly expiresAt: string | null },
): void {
  if (by === personId) return;
  const { db } = ground;
  tell(ground, personId, (noticed) =>
    roleNotice(noticed, what, { role: `${held.role} ${placeWords(db, held)}`, expiresAt: held.expiresAt }, rowOf(db, by).name),
  );
}

function placeWords(db: Db, { networkId, siteId }: HeldRole): string {
  if (networkId === null) return 'of the whole deployment';
  const network = db.select({ name: networks.name }).from(networks).where(eq(networks.id, networkId)).get()?.name ?? '';
  if (siteId === null) return `in ${network}`;
  const site = db.select({ code: sites.code }).from(sites).where(eq(sites.id, siteId)).get()?.code ?? '';
  return `of site ${site} in ${network}`;
}
