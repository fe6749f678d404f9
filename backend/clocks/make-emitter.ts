import { and, eq } from 'drizzle-orm';
import { type Geodetic, geodeticToItrs } from '#shared/earth/ellipsoid';
import { type Scale } from '#shared/time/scales';
import { type Instant } from '#shared/time/instant';
import { emitters, emitterVersions } from '#schema/schema';
import { codeTaken } from '../api/refusal';
import { utcText } from '../ground';
import { openNetwork } from '../networks/network-rows';
import { makerOf, type Making } from '../networks/note-setup';

/** What an emitter of reference pulses is made from. */
export interface EmitterValues {
  readonly networkId: number;
  readonly code: string;
  readonly name: string;
  readonly place: Geodetic;
  /** Standard error of each axis. */
  readonly positionSigmaM: number;
  /** The scale of its schedule. */
  readonly scale: Scale;
  /** Pulse k is sent k periods after the first. */
  readonly schedule: { readonly first: Instant; readonly periodS: number };
  /** The emitter's own error, common to all clocks that are set by it. */
  readonly referenceId: number;
  /** A trigger this near to an expected arrival is that pulse. */
  readonly toleranceNs: number;
}

/**
 * Makes an emitter.
 *
 * @returns its id
 * @throws Refusal when the code is taken
 */
export function makeEmitter({ tx, note, actor, nowMs }: Making, values: EmitterValues): number {
  const { networkId, code, name, place, schedule, ...version } = values;
  openNetwork(tx, networkId);
  const same = and(eq(emitters.networkId, networkId), eq(emitters.code, code));
  if (tx.select({ id: emitters.id }).from(emitters).where(same).get()) throw codeTaken(code, 'emitter of the network');
  const made = { createdAt: utcText(nowMs), createdBy: makerOf(actor) };
  const { id } = tx
    .insert(emitters)
    .values({ networkId, code, name, ...made })
    .returning({ id: emitters.id })
    .get();
  const [itrsXM, itrsYM, itrsZM] = geodeticToItrs(place);
  tx.insert(emitterVersions)
    .values({ ...version, emitterId: id, number: 1, itrsXM, itrsYM, itrsZM, schedule: JSON.stringify(schedule), ...made })
    .run();
  note({ action: 'emitter:made', subjectKind: 'emitter', subjectId: id, networkId, details: { code } });
  return id;
}
