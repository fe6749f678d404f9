import { and, eq, isNull } from 'drizzle-orm';
import { MOST_SEGMENTS, type ClockSegmentShown } from '#shared/contract/clock-routes';
import { compareInstants, type Instant } from '#shared/time/instant';
import { clocks, clockSegments, timeReferences } from '#schema/schema';
import { absent, codeTaken, conflict, unusable } from '../api/refusal';
import { utcText } from '../ground';
import { openNetwork } from '../networks/network-rows';
import { makerOf, noteSetup, type Making } from '../networks/note-setup';
import { clockRow, recordInForce } from './clock-rows';
import { effectsOf } from './effects';

const MOST_CLOCKS = 1_000;
const MOST_STATEMENTS = 100_000;

/** What a clock is made from. */
export interface ClockValues {
  readonly networkId: number;
  readonly code: string;
  readonly name?: string | undefined;
}

/** A stretch of a clock record as it is stated. */
export interface SegmentValues {
  readonly from: Instant;
  /** The instant at which the clock was ahead by exactly the offset. */
  readonly at: Instant;
  readonly offsetNs: number;
  readonly offsetSigmaNs: number;
  readonly rateNsPerDay: number;
  readonly rateSigmaNsPerDay: number;
  readonly covarianceNs2PerDay?: number | undefined;
  readonly referenceId?: number | null | undefined;
  readonly origin: ClockSegmentShown['origin'];
  readonly note?: string | undefined;
}

/**
 * Makes a clock, without a record.
 *
 * @returns its id
 * @throws Refusal when the code is taken
 */
export function makeClock({ tx, note, actor, nowMs }: Making, { networkId, code, name = '' }: ClockValues): number {
  openNetwork(tx, networkId);
  const codes = tx.select({ code: clocks.code }).from(clocks).where(eq(clocks.networkId, networkId)).all();
  if (codes.length >= MOST_CLOCKS) throw conflict(`The network has ${MOST_CLOCKS} clocks, which is the most.`);
  if (codes.some((one) => one.code === code)) throw codeTaken(code, 'clock of the network');
  const { id } = tx
    .insert(clocks)
    .values({ networkId, code, name, createdAt: utcText(nowMs), createdBy: makerOf(actor) })
    .returning({ id: clocks.id })
    .get();
  note({ action: 'clock:made', subjectKind: 'clock', subjectId: id, networkId, details: { code } });
  noteSetup(tx, networkId, { what: 'clock', id }, nowMs);
  return id;
}

/**
 * Adds a stretch to a clock's record.
 *
 * @param path of the stretch in the request, with its dot, for what goes wrong
 * @returns what that does to the record, a sentence each
 * @throws Refusal when another begins at the same instant, or its reference is of another network
 */
export const addSegment = (making: Making, clockId: number, values: SegmentValues, path = ''): string[] =>
  changeRecord(making, clockId, 'clock-segment:added', (networkId, record) => {
    if (record.length >= MOST_SEGMENTS) throw conflict(`The clock has ${MOST_SEGMENTS} segments in force, which is the most.`);
    const known = statements(making, clockId);
    const segment = 1 + known.reduce((most, one) => Math.max(most, one.segment), 0);
    insertSegment(making, { networkId, clockId, segment, number: 1 }, values, record, path);
    return segment;
  });

/**
 * States a stretch in force anew, whole.
 *
 * @returns what that does to the record, a sentence each
 * @throws Refusal when the stretch is not in force, or as for an addition
 */
export const editSegment = (making: Making, clockId: number, segment: number, values: SegmentValues): string[] =>
  changeRecord(making, clockId, 'clock-segment:edited', (networkId, record) => {
    const former = supersede(making, record, segment);
    const others = record.filter((one) => one !== former);
    insertSegment(making, { networkId, clockId, segment, number: former.number + 1 }, values, others, '');
    return segment;
  });

/**
 * Takes a stretch out of a clock's record, so that the one before it goes on.
 *
 * @returns what that does to the record, a sentence each
 */
export const endSegment = (making: Making, clockId: number, segment: number): string[] =>
  changeRecord(making, clockId, 'clock-segment:ended', (_networkId, record) => {
    supersede(making, record, segment);
    return segment;
  });

function changeRecord(
  { tx, note, nowMs }: Making,
  clockId: number,
  action: string,
  work: (networkId: number, record: readonly ClockSegmentShown[]) => number,
): string[] {
  const { networkId, version } = clockRow(tx, clockId);
  openNetwork(tx, networkId);
  const before = recordInForce(tx, clockId);
  const segment = work(networkId, before);
  tx.update(clocks)
    .set({ version: version + 1 })
    .where(eq(clocks.id, clockId))
    .run();
  note({ action, subjectKind: 'clock', subjectId: clockId, networkId, details: { segment } });
  noteSetup(tx, networkId, { what: 'clock', id: clockId }, nowMs);
  return effectsOf(before, recordInForce(tx, clockId));
}

function statements({ tx }: Making, clockId: number) {
  const known = tx.select({ segment: clockSegments.segment }).from(clockSegments).where(eq(clockSegments.clockId, clockId)).all();
  if (known.length >= MOST_STATEMENTS) throw conflict(`The clock's segments were stated ${MOST_STATEMENTS} times, which is the most.`);
  return known;
}

function supersede({ tx, actor, nowMs }: Making, record: readonly ClockSegmentShown[], segment: number): ClockSegmentShown {
  const former = record.find((one) => one.segment === segment);
  if (!former) throw absent();
  tx.update(clockSegments)
    .set({ supersededAt: utcText(nowMs), supersededBy: makerOf(actor) })
    .where(and(eq(clockSegments.id, former.id), isNull(clockSegments.supersededAt)))
    .run();
  return former;
}

interface Whose {
  readonly networkId: number;
  readonly clockId: number;
  readonly segment: number;
  readonly number: number;
}

function insertSegment(
  { tx, actor, nowMs }: Making,
  { networkId, ...whose }: Whose,
  { from, at, ...values }: SegmentValues,
  others: readonly ClockSegmentShown[],
  path: string,
): void {
  const same = others.find((one) => compareInstants(one.from, from) === 0);
  if (same)
    throw unusable({
      where: `${path}from`,
      text: `is the instant at which segment ${same.segment} begins; it must be one of its own: state segment ${same.segment} anew instead`,
    });
  const { referenceId = null } = values;
  if (referenceId !== null) {
    const known = tx
      .select({ id: timeReferences.id })
      .from(timeReferences)
      .where(and(eq(timeReferences.id, referenceId), eq(timeReferences.networkId, networkId)))
      .get();
    if (!known)
      throw unusable({
        where: `${path}referenceId`,
        text: `is ${referenceId}; it must be the id of a time reference of this network, or null`,
      });
  }
  tx.insert(clockSegments)
    .values({
      ...whose,
      ...values,
      covarianceNs2PerDay: values.covarianceNs2PerDay ?? 0,
      note: values.note ?? '',
      fromTaiS: from.taiS,
      fromPs: from.ps,
      atTaiS: at.taiS,
      atPs: at.ps,
      createdAt: utcText(nowMs),
      createdBy: makerOf(actor),
    })
    .run();
}
