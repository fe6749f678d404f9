import { and, eq, isNull } from 'drizzle-orm';
import { timeReferences, timeReferenceVersions } from '#schema/schema';
import { codeTaken, conflict } from '../api/refusal';
import { utcText } from '../ground';
import { openNetwork } from '../networks/network-rows';
import { makerOf, noteSetup, type Making } from '../networks/note-setup';

const MOST_REFERENCES = 1_000;
const MOST_VERSIONS = 500;

/** What a time reference is made from. */
export interface ReferenceValues {
  readonly networkId: number;
  readonly code: string;
  readonly name?: string | undefined;
  readonly sigmaNs: number;
  readonly note?: string | undefined;
}

/**
 * Makes a time reference.
 *
 * @returns its id
 * @throws Refusal when the code is taken
 */
export function makeReference(making: Making, { networkId, code, name = '', sigmaNs, note: why = '' }: ReferenceValues): number {
  const { tx, note, actor, nowMs } = making;
  openNetwork(tx, networkId);
  const codes = tx.select({ code: timeReferences.code }).from(timeReferences).where(eq(timeReferences.networkId, networkId)).all();
  if (codes.length >= MOST_REFERENCES) throw conflict(`The network has ${MOST_REFERENCES} time references, which is the most.`);
  if (codes.some((one) => one.code === code)) throw codeTaken(code, 'time reference of the network');
  const { id } = tx
    .insert(timeReferences)
    .values({ networkId, code, name, createdAt: utcText(nowMs), createdBy: makerOf(actor) })
    .returning({ id: timeReferences.id })
    .get();
  stateSigma(making, id, sigmaNs, why);
  note({ action: 'time-reference:made', subjectKind: 'time-reference', subjectId: id, networkId, details: { code, sigmaNs } });
  noteSetup(tx, networkId, { what: 'time-reference', id }, nowMs);
  return id;
}

/** States a reference's standard error anew; the former version stays as it was. */
export function stateSigma({ tx, actor, nowMs }: Making, referenceId: number, sigmaNs: number, note: string): void {
  const numbers = tx
    .select({ number: timeReferenceVersions.number })
    .from(timeReferenceVersions)
    .where(eq(timeReferenceVersions.referenceId, referenceId))
    .all();
  if (numbers.length >= MOST_VERSIONS) throw conflict(`The reference was stated ${MOST_VERSIONS} times, which is the most.`);
  const at = utcText(nowMs);
  tx.update(timeReferenceVersions)
    .set({ supersededAt: at, supersededBy: makerOf(actor) })
    .where(and(eq(timeReferenceVersions.referenceId, referenceId), isNull(timeReferenceVersions.supersededAt)))
    .run();
  tx.insert(timeReferenceVersions)
    .values({ referenceId, number: numbers.length + 1, sigmaNs, note, createdAt: at, createdBy: makerOf(actor) })
    .run();
}
