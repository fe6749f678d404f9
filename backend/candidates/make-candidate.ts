import { and, count, eq, inArray, isNull, max } from 'drizzle-orm';
import { type CandidateEdit, type CandidateMaking, MOST_CANDIDATE_EVENTS } from '#shared/contract/candidate-routes';
import { MOST_EVENTS_PAIRED } from '#shared/contract/pair-routes';
import { candidateEvents, candidateFrames, candidates, candidateSets, frames } from '#schema/schema';
import { conflict, unusable } from '../api/refusal';
import { type Db } from '../db';
import { utcText } from '../ground';
import { openNetwork } from '../networks/network-rows';
import { type Making } from '../networks/note-setup';
import { part, rowsOf, type Query } from '../search/query';
import { proposeAnew } from './candidate-claims';
import { type CandidateRow } from './candidate-rows';
import { keepStep } from './candidate-steps';

/** The members of coincidences that stand, with the hash of their set. */
const membersOfQuery = (networkId: number, coincidenceIds: readonly number[]): Query =>
  part(
    `SELECT c.id, c.set_hash AS setHash, m.trigger_id AS eventId FROM json_each(?) i CROSS JOIN coincidences c ON c.id = i.value
     JOIN members m ON m.coincidence_id = c.id WHERE c.network_id = ? AND c.state <> 'staged' ORDER BY i.key, m.place`,
    JSON.stringify(coincidenceIds),
    networkId,
  );

/** Of events those that stand in a network. */
const standingQuery = (networkId: number, eventIds: readonly number[]): Query =>
  part(
    'SELECT e.trigger_id AS eventId FROM json_each(?) i CROSS JOIN events e ON e.trigger_id = i.value WHERE e.network_id = ?',
    JSON.stringify(eventIds),
    networkId,
  );

interface Member {
  readonly id: number;
  readonly setHash: string;
  readonly eventId: number;
}

/**
 * Makes a candidate, a draft of whoever asks.
 *
 * @param db the writing connection
 * @returns its id
 * @throws Refusal where nothing is named, or something is not of the network or does not stand, or there are too many events
 */
export function makeCandidate(
  making: Making,
  db: Db,
  { networkId, authorId, given }: { readonly networkId: number; readonly authorId: number; readonly given: CandidateMaking },
): number {
  const { tx, nowMs } = making;
  const { title, about = '', coincidenceIds = [], eventIds = [], frameIds = [] } = given;
  openNetwork(tx, networkId);
  if (coincidenceIds.length + eventIds.length === 0)
    throw unusable({
      where: 'eventIds',
      text: 'is empty or missing, and so is "coincidenceIds"; at least one of them must name what the candidate is of',
    });
  const members = rowsOf<Member>(db, membersOfQuery(networkId, coincidenceIds));
  refuseUnknown(coincidenceIds, new Set(members.map(({ id }) => id)), 'coincidenceIds', 'a coincidence of this network');
  const events = [...new Set([...members.map(({ eventId }) => eventId), ...eventIds])];
  const standing = new Set(rowsOf<Pick<Member, 'eventId'>>(db, standingQuery(networkId, events)).map(({ eventId }) => eventId));
  refuseUnknown(eventIds, standing, 'eventIds', 'an event that stands in this network');
  const lost = members.find(({ eventId }) => !standing.has(eventId));
  if (lost) throw conflict(`Coincidence ${lost.id} holds event ${lost.eventId}, which does not stand any more.`);
  refuseMany(events.length);
  const now = utcText(nowMs);
  const [last] = tx
    .select({ number: max(candidates.number) })
    .from(candidates)
    .where(eq(candidates.networkId, networkId))
    .all();
  const number = (last?.number ?? 0) + 1;
  const { id: candidateId } = tx
    .insert(candidates)
    .values({ networkId, number, title, about, state: 'draft', authorId, createdAt: now, updatedAt: now })
    .returning({ id: candidates.id })
    .get();
  for (const setHash of new Set(members.map((member) => member.setHash))) tx.insert(candidateSets).values({ candidateId, setHash }).run();
  for (const triggerId of events) tx.insert(candidateEvents).values({ candidateId, triggerId, isIn: true, reason: '' }).run();
  putFrames(making, { networkId, candidateId, frameIds });
  proposeAnew(making, db, candidateId);
  keepStep(making, db, { candidateId, action: 'made' });
  return candidateId;
}

/**
 * Changes the events of a candidate, in and out, and its frames; proposes anew what the numbers carry then.
 *
 * @throws Refusal where an event or frame is not of the network, an event that counts does not stand, or too many or none would count
 */
export function changeParts(
  making: Making,
  db: Db,
  { id: candidateId, networkId }: Pick<CandidateRow, 'id' | 'networkId'>,
  { events, frameIds }: Pick<CandidateEdit, 'events' | 'frameIds'>,
): void {
  if (events) putEvents(making, db, { networkId, candidateId, events });
  if (frameIds) putFrames(making, { networkId, candidateId, frameIds });
  if (events || frameIds) proposeAnew(making, db, candidateId);
}

interface PutEvents {
  readonly networkId: number;
  readonly candidateId: number;
  readonly events: NonNullable<CandidateEdit['events']>;
}

function putEvents({ tx }: Making, db: Db, { networkId, candidateId, events }: PutEvents): void {
  const ids = events.map(({ eventId }) => eventId);
  const known = new Set([
    ...rowsOf<Pick<Member, 'eventId'>>(db, standingQuery(networkId, ids)).map(({ eventId }) => eventId),
    // One that the candidate names already may be left out when it does not stand any more.
    ...tx
      .select({ eventId: candidateEvents.triggerId })
      .from(candidateEvents)
      .where(eq(candidateEvents.candidateId, candidateId))
      .all()
      .map(({ eventId }) => eventId),
  ]);
  for (const [at, { eventId, isIn, reason }] of events.entries()) {
    if (!known.has(eventId))
      throw unusable({ where: `events[${at}].eventId`, text: `is ${eventId}; it must be an event that stands in this network` });
    if (ids.indexOf(eventId) < at)
      throw unusable({ where: `events[${at}].eventId`, text: `is ${eventId} for the second time; each event must be named once` });
    tx.insert(candidateEvents)
      .values({ candidateId, triggerId: eventId, isIn, reason })
      .onConflictDoUpdate({ target: [candidateEvents.candidateId, candidateEvents.triggerId], set: { isIn, reason } })
      .run();
  }
  const countOf = (isIn?: boolean): number =>
    tx
      .select({ n: count() })
      .from(candidateEvents)
      .where(and(eq(candidateEvents.candidateId, candidateId), isIn === undefined ? undefined : eq(candidateEvents.isIn, isIn)))
      .get()?.n ?? 0;
  refuseMany(countOf(true));
  if (countOf(true) === 0) throw conflict('No event would count any more: a candidate is of at least one.');
  if (countOf() > MOST_CANDIDATE_EVENTS)
    throw conflict(`The candidate would name ${countOf()} events, counted in or left out; the most is ${MOST_CANDIDATE_EVENTS}.`);
}

interface PutFrames {
  readonly networkId: number;
  readonly candidateId: number;
  readonly frameIds: readonly number[];
}

function putFrames({ tx }: Making, { networkId, candidateId, frameIds }: PutFrames): void {
  const open = tx
    .select({ id: frames.id })
    .from(frames)
    .where(and(eq(frames.networkId, networkId), isNull(frames.closedAt), inArray(frames.id, [...frameIds])))
    .all();
  refuseUnknown(frameIds, new Set(open.map(({ id }) => id)), 'frameIds', 'an open frame of this network');
  tx.delete(candidateFrames).where(eq(candidateFrames.candidateId, candidateId)).run();
  for (const [at, frameId] of frameIds.entries())
    tx.insert(candidateFrames)
      .values({ candidateId, frameId, place: at + 1 })
      .run();
}

function refuseUnknown(ids: readonly number[], known: ReadonlySet<number>, where: string, what: string): void {
  const at = ids.findIndex((id) => !known.has(id));
  if (at >= 0) throw unusable({ where: `${where}[${at}]`, text: `is ${ids[at] ?? ''}; it must be the id of ${what}` });
}

function refuseMany(events: number): void {
  if (events > MOST_EVENTS_PAIRED)
    throw conflict(`${events} events would count; the most is ${MOST_EVENTS_PAIRED}, since every pair of them is computed.`);
}
