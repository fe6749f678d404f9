import { eq } from 'drizzle-orm';
import { type Instant } from '#shared/time/instant';
import { networks } from '#schema/schema';
import { codeTaken } from '../api/refusal';
import { utcText } from '../ground';
import { makerOf, noteSetup, type Making } from './note-setup';

/** What a network is made from. */
export interface NetworkValues {
  readonly code: string;
  readonly name: string;
  /** The common origin of all frames, with the geocentre. */
  readonly origin: Instant;
  readonly neededSignatures?: number | undefined;
  readonly needsSecondFactor?: boolean | undefined;
  readonly staleAboveSigmas?: number | undefined;
}

/**
 * Makes a network.
 *
 * @returns its id
 * @throws Refusal when the code is taken
 */
export function makeNetwork({ tx, note, actor, nowMs }: Making, { origin, ...values }: NetworkValues): number {
  if (tx.select({ id: networks.id }).from(networks).where(eq(networks.code, values.code)).get()) throw codeTaken(values.code, 'network');
  const { id } = tx
    .insert(networks)
    .values({ ...values, originTaiS: origin.taiS, originPs: origin.ps, createdAt: utcText(nowMs), createdBy: makerOf(actor) })
    .returning({ id: networks.id })
    .get();
  note({ action: 'network:made', subjectKind: 'network', subjectId: id, networkId: id, details: { code: values.code } });
  noteSetup(tx, id, { what: 'network', id }, nowMs);
  return id;
}
