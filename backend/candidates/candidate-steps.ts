import { and, asc, desc, eq, gt, isNull, lt, type SQL } from 'drizzle-orm';
import { type CandidateClaim, type CandidateInFull, type CandidateSignature, type CandidateStep } from '#shared/contract/candidate-routes';
import { candidateEditors, candidates, candidateVersions, people, reviewers } from '#schema/schema';
import { Refusal } from '../api/refusal';
import { type Db } from '../db';
import { utcText } from '../ground';
import { noteChange } from '../live/note-change';
import { type Making } from '../networks/note-setup';
import { differencesOf, type Told } from './differences';
import { candidateEventsOf, candidateFramesOf, candidateRow, candidateSetsOf } from './candidate-rows';
import { claimsOf } from './claim-rows';
import { type Frozen, reviewersOf, signaturesOf } from './review-rows';

/** Steps by which somebody writes a candidate, and so never reviews it. */
const WRITING = ['made', 'changed', 'claims-proposed', 'claim-added', 'claim-decided', 'submitted'] as const;

/** What a step did, as the history and the audit trail call it. */
export type StepAction =
  (typeof WRITING)[number] | 'reviewers-named' | 'reviewer-released' | 'signed' | 'signature-withdrawn' | 'out-of-date' | 'withdrawn';

/** A step of a candidate. */
export interface Step {
  readonly candidateId: number;
  readonly action: StepAction;
  /** Of a submission: what it froze. */
  readonly frozen?: Frozen;
}

const MOST_STEPS_TOLD = 5;

/** A candidate as its history keeps it, by names that people read. */
function bodyOf(db: Pick<Db, 'select' | '$client'>, candidateId: number): Told {
  const { title, about, state, outOfDateAt } = candidateRow(db, candidateId);
  const events = candidateEventsOf(db, candidateId);
  const names = new Map(events.map(({ eventId, name }) => [eventId, name]));
  return {
    title,
    about,
    state,
    coincidences: candidateSetsOf(db, candidateId).map(({ name }) => name),
    events: Object.fromEntries(events.map(({ name, isIn, reason }) => [name, { isIn, reason }])),
    frames: candidateFramesOf(db, candidateId).map(({ code }) => code),
    claims: Object.fromEntries(claimsOf(db, candidateId).map((claim) => [claim.id, claimTold(claim, names)])),
    reviewers: reviewersOf(db, candidateId).map(({ name }) => name),
    signatures: Object.fromEntries(signaturesOf(db, candidateId).map((signature) => [signature.id, signatureTold(signature)])),
    outOfDateAt,
  };
}

const claimTold = ({ kind, a, b, frame, state, note }: CandidateClaim, names: ReadonlyMap<number, string>): Told => ({
  kind,
  of: a === null || b === null ? 'the whole' : `${names.get(a) ?? a}, ${names.get(b) ?? b}`,
  frame,
  state,
  note,
});

const signatureTold = ({ person, snapshot, decision, reason, withdrawnAt, supersededById }: CandidateSignature): Told => ({
  by: person.name,
  snapshot,
  decision,
  reason,
  stands: withdrawnAt === null && supersededById === null,
});

/**
 * Keeps what a candidate is after a step, notes who took it, for the audit trail and for subscribers, and counts whoever edited among those
 * who never review it.
 *
 * @param making the step's transaction
 * @param step the candidate, whose row has the new version by now, and what was done
 */
export function keepStep({ tx, note, actor, nowMs }: Making, db: Db, { candidateId, action, frozen }: Step): void {
  const at = utcText(nowMs);
  const byId = actor.kind === 'person' ? actor.id : null;
  if (byId !== null && WRITING.some((one) => one === action)) keepWriter(tx, candidateId, byId, at);
  const { networkId, version } = candidateRow(tx, candidateId);
  const body = JSON.stringify({ ...bodyOf(db, candidateId), ...(frozen && { frozen }) });
  tx.insert(candidateVersions).values({ candidateId, version, at, byId, action, body }).run();
  note({ action: `candidate:${action}`, subjectKind: 'candidate', subjectId: candidateId, networkId, details: { version } });
  noteChange(tx, networkId, 'candidate', { what: action, id: candidateId }, nowMs);
}

/** Whoever writes a candidate is asked to review it no more. */
function keepWriter(tx: Making['tx'], candidateId: number, personId: number, at: string): void {
  tx.insert(candidateEditors).values({ candidateId, personId, since: at }).onConflictDoNothing().run();
  tx.update(reviewers)
    .set({ releasedAt: at })
    .where(and(eq(reviewers.candidateId, candidateId), eq(reviewers.personId, personId), isNull(reviewers.releasedAt)))
    .run();
}

const STEP_COLUMNS = {
  version: candidateVersions.version,
  at: candidateVersions.at,
  byId: people.id,
  byName: people.name,
  action: candidateVersions.action,
};

interface StepRow {
  readonly version: number;
  readonly at: string;
  readonly byId: number | null;
  readonly byName: string | null;
  readonly action: string;
}

const stepOf = ({ byId, byName, ...row }: StepRow): CandidateInFull['lastStep'] => ({
  version: row.version,
  at: row.at,
  by: byId === null ? null : { id: byId, name: byName ?? '' },
  action: row.action,
});

/** Steps of a candidate, those that also hold to a condition, with who took each; without their bodies, which may be large. */
const stepRows = (db: Pick<Db, 'select'>, candidateId: number, also?: SQL) =>
  db
    .select(STEP_COLUMNS)
    .from(candidateVersions)
    .leftJoin(people, eq(people.id, candidateVersions.byId))
    .where(and(eq(candidateVersions.candidateId, candidateId), also));

/** The last step of a candidate's history. */
export function lastStepOf(db: Pick<Db, 'select'>, candidateId: number): CandidateInFull['lastStep'] {
  const row = stepRows(db, candidateId).orderBy(desc(candidateVersions.version)).limit(1).get();
  if (!row) throw new Error(`candidate ${candidateId} has no history`);
  return stepOf(row);
}

/** Steps of a candidate with what each changed, the latest first, from before a version on. */
export function stepsOf(db: Pick<Db, 'select'>, candidateId: number, before: number | undefined, most: number): CandidateStep[] {
  const rows = db
    .select({ ...STEP_COLUMNS, body: candidateVersions.body })
    .from(candidateVersions)
    .leftJoin(people, eq(people.id, candidateVersions.byId))
    .where(and(eq(candidateVersions.candidateId, candidateId), before === undefined ? undefined : lt(candidateVersions.version, before)))
    .orderBy(desc(candidateVersions.version))
    .limit(most + 1)
    .all();
  return rows
    .slice(0, most)
    .map((row, at) => ({ ...stepOf(row), differences: differencesOf(toldIn(rows[at + 1]?.body), toldIn(row.body)) }));
}

/** What a step's body tells; what a submission froze is told by its snapshot. */
function toldIn(body: string | undefined): Told {
  if (body === undefined) return {};
  return Object.fromEntries(Object.entries(JSON.parse(body) as Told).filter(([name]) => name !== 'frozen'));
}

/** Refuses a change of a candidate that somebody changed meanwhile, and says what they did. */
export function refuseStale(db: Pick<Db, 'select'>, candidateId: number, seenVersion: number): void {
  const { version } = candidateRow(db, candidateId);
  if (version === seenVersion) return;
  const since = stepRows(db, candidateId, gt(candidateVersions.version, seenVersion))
    .orderBy(asc(candidateVersions.version))
    .limit(MOST_STEPS_TOLD)
    .all()
    .map(({ version: number, byName, action }) => `version ${number} (${action} by ${byName ?? 'the program'})`);
  const told = since.length === 0 ? `it is at version ${version}` : since.join(', ');
  throw new Refusal(409, 'Changed meanwhile', `Someone changed the candidate after you read it: ${told}. Read it again, and decide anew.`, {
    where: 'version',
  });
}

/** Gives a candidate its next version. */
export function touch({ tx, nowMs }: Making, candidateId: number, changed: Partial<typeof candidates.$inferInsert> = {}): void {
  const { version } = candidateRow(tx, candidateId);
  tx.update(candidates)
    .set({ ...changed, version: version + 1, updatedAt: utcText(nowMs) })
    .where(eq(candidates.id, candidateId))
    .run();
}
