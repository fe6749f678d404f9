import { sql } from 'drizzle-orm';
import { type AnySQLiteColumn, foreignKey, index, integer, primaryKey, sqliteTable, text, uniqueIndex } from 'drizzle-orm/sqlite-core';
import { storedFiles } from './files';
import { areTogether, checks, isCount, isFlag, isJson, isOneOf, isSha256, isText, isUtc } from './forms';
import { frames } from './frames';
import { triggers } from './intake';
import { networks } from './networks';
import { people } from './people';
import { CANDIDATE_STATES, CLAIM_KINDS } from './words';

/** A statement about the order of events that an analyst builds and reviewers sign. */
export const candidates = sqliteTable(
  'candidates',
  {
    id: integer().primaryKey(),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    /** 1, 2, 3, ... of the network. */
    number: integer().notNull(),
    title: text().notNull(),
    about: text().notNull(),
    state: text({ enum: CANDIDATE_STATES }).notNull(),
    authorId: integer('author_id')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
    /** The snapshot that is or was reviewed last; NULL before the first. */
    snapshotId: integer('snapshot_id').references((): AnySQLiteColumn => snapshots.id, { onDelete: 'restrict' }),
    /** From when what its snapshot was computed from has changed; NULL while it has not. */
    outOfDateAt: text('out_of_date_at'),
    /** Grows with each edit; an edit states the one it saw. */
    version: integer().notNull().default(1),
    createdAt: text('created_at').notNull(),
    updatedAt: text('updated_at').notNull(),
    submittedAt: text('submitted_at'),
  },
  (t) => [
    uniqueIndex('candidates_number').on(t.networkId, t.number),
    uniqueIndex('candidates_of_network').on(t.id, t.networkId),
    // The board: those of a state, the last touched first.
    index('candidates_by_state').on(t.networkId, t.state, t.updatedAt, t.id),
    // All, the last touched first.
    index('candidates_by_update').on(t.networkId, t.updatedAt, t.id),
    // An analyst's own.
    index('candidates_of_author').on(t.authorId, t.updatedAt, t.id),
    ...checks('candidates', {
      number: isCount(t.number, 1),
      title: isText(t.title, 400),
      about: isText(t.about, 65_536, 0),
      state: isOneOf(t.state, CANDIDATE_STATES),
      snapshot: sql`${t.state} IN ('draft', 'withdrawn') OR ${t.snapshotId} IS NOT NULL`,
      out_of_date_at: isUtc(t.outOfDateAt),
      version: isCount(t.version, 1),
      created_at: isUtc(t.createdAt),
      updated_at: isUtc(t.updatedAt),
      submitted_at: isUtc(t.submittedAt),
    }),
  ],
);

/** What a candidate was after each edit: who, when, and the whole of it. Only ever added to. */
export const candidateVersions = sqliteTable(
  'candidate_versions',
  {
    id: integer().primaryKey(),
    candidateId: integer('candidate_id')
      .notNull()
      .references(() => candidates.id, { onDelete: 'restrict' }),
    version: integer().notNull(),
    at: text().notNull(),
    /** NULL where the program did it (out of date, confirmed by the last signature). */
    byId: integer('by_id').references(() => people.id, { onDelete: 'restrict' }),
    action: text().notNull(),
    /** JSON: the candidate with its events, frames and claims. */
    body: text().notNull(),
  },
  (t) => [
    // A candidate's history, and one version of it.
    uniqueIndex('candidate_versions_number').on(t.candidateId, t.version),
    ...checks('candidate_versions', {
      version: isCount(t.version, 1),
      at: isUtc(t.at),
      action: isText(t.action, 64),
      body: isJson(t.body, 16_777_216),
    }),
  ],
);

/** Who wrote a candidate or edited a claim of it: none of them reviews it. Only ever added to. */
export const candidateEditors = sqliteTable(
  'candidate_editors',
  {
    candidateId: integer('candidate_id')
      .notNull()
      .references(() => candidates.id, { onDelete: 'restrict' }),
    personId: integer('person_id')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
    since: text().notNull(),
  },
  (t) => [primaryKey({ columns: [t.candidateId, t.personId] }), ...checks('candidate_editors', { since: isUtc(t.since) })],
);

/** The coincidences that a candidate was built from, by the name that they keep when they are computed anew. */
export const candidateSets = sqliteTable(
  'candidate_sets',
  {
    candidateId: integer('candidate_id')
      .notNull()
      .references(() => candidates.id, { onDelete: 'cascade' }),
    setHash: text('set_hash').notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.candidateId, t.setHash] }),
    // The candidates that a coincidence is in.
    index('candidate_sets_by_hash').on(t.setHash),
    ...checks('candidate_sets', { set_hash: isSha256(t.setHash) }),
  ],
);

/** The events that a candidate counts in or leaves out, and why. */
export const candidateEvents = sqliteTable(
  'candidate_events',
  {
    candidateId: integer('candidate_id')
      .notNull()
      .references(() => candidates.id, { onDelete: 'cascade' }),
    triggerId: integer('trigger_id')
      .notNull()
      .references(() => triggers.id, { onDelete: 'restrict' }),
    isIn: integer('is_in', { mode: 'boolean' }).notNull(),
    reason: text().notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.candidateId, t.triggerId] }),
    // The candidates that an event is in.
    index('candidate_events_of_trigger').on(t.triggerId),
    ...checks('candidate_events', {
      is_in: isFlag(t.isIn),
      reason: sql`${isText(t.reason, 2_000, 0)} AND (${t.isIn} = 1 OR ${t.reason} <> '')`,
    }),
  ],
);

/** The frames in which a candidate's order is to be stated, besides the geocentric one. */
export const candidateFrames = sqliteTable(
  'candidate_frames',
  {
    candidateId: integer('candidate_id')
      .notNull()
      .references(() => candidates.id, { onDelete: 'cascade' }),
    frameId: integer('frame_id')
      .notNull()
      .references(() => frames.id, { onDelete: 'restrict' }),
    /** 1, 2, 3, ... as listed. */
    place: integer().notNull(),
  },
  (t) => [primaryKey({ columns: [t.candidateId, t.frameId] }), ...checks('candidate_frames', { place: isCount(t.place, 1) })],
);

/** One statement about one pair or about the whole. */
export const claims = sqliteTable(
  'claims',
  {
    id: integer().primaryKey(),
    candidateId: integer('candidate_id')
      .notNull()
      .references(() => candidates.id, { onDelete: 'restrict' }),
    kind: text({ enum: CLAIM_KINDS }).notNull(),
    /** The pair, a the one that is said to be first (or not to have been caused by b); both NULL for the whole. */
    aTriggerId: integer('a_trigger_id'),
    bTriggerId: integer('b_trigger_id'),
    /** The frame of `before-in-frame`; NULL there means the geocentric one. */
    frameId: integer('frame_id').references(() => frames.id, { onDelete: 'restrict' }),
    state: text({ enum: ['proposed', 'accepted', 'weakened', 'dropped'] }).notNull(),
    /** JSON: the numbers that it states. */
    numbers: text().notNull(),
    note: text().notNull().default(''),
    /** NULL while it is as the program proposed it. */
    editedBy: integer('edited_by').references(() => people.id, { onDelete: 'restrict' }),
    editedAt: text('edited_at'),
  },
  (t) => [
    // Both events are ones that the candidate names.
    foreignKey({
      columns: [t.candidateId, t.aTriggerId],
      foreignColumns: [candidateEvents.candidateId, candidateEvents.triggerId],
      name: 'claims_a',
    }).onDelete('restrict'),
    foreignKey({
      columns: [t.candidateId, t.bTriggerId],
      foreignColumns: [candidateEvents.candidateId, candidateEvents.triggerId],
      name: 'claims_b',
    }).onDelete('restrict'),
    index('claims_of_candidate').on(t.candidateId, t.id),
    // A signature or comment names a claim of its own candidate.
    uniqueIndex('claims_with_candidate').on(t.id, t.candidateId),
    ...checks('claims', {
      kind: isOneOf(t.kind, CLAIM_KINDS),
      pair: sql`${areTogether(t.aTriggerId, t.bTriggerId)} AND (${t.aTriggerId} IS NULL OR ${t.aTriggerId} <> ${t.bTriggerId})
        AND (${t.aTriggerId} IS NOT NULL OR ${t.kind} = 'no-common-order')`,
      frame: sql`${t.frameId} IS NULL OR ${t.kind} = 'before-in-frame'`,
      state: isOneOf(t.state, ['proposed', 'accepted', 'weakened', 'dropped']),
      numbers: isJson(t.numbers, 65_536),
      note: isText(t.note, 2_000, 0),
      edited: areTogether(t.editedBy, t.editedAt),
      edited_at: isUtc(t.editedAt),
    }),
  ],
);

/** Everything that a candidate's claims rest on, frozen when it was submitted. Never changed, never deleted. */
export const snapshots = sqliteTable(
  'snapshots',
  {
    id: integer().primaryKey(),
    candidateId: integer('candidate_id')
      .notNull()
      .references((): AnySQLiteColumn => candidates.id, { onDelete: 'restrict' }),
    /** 1, 2, 3, ... of the candidate. */
    number: integer().notNull(),
    /** Of the body's bytes. */
    sha256: text().notNull(),
    /** JSON: readings, segments, places, rules, frames, tables, numbers of every pair, claims. */
    body: text().notNull(),
    /** The version of package.json that computed it. */
    program: text().notNull(),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
    /** What stands under a report and leads back to the candidate. */
    reportCode: text('report_code').notNull(),
  },
  (t) => [
    uniqueIndex('snapshots_number').on(t.candidateId, t.number),
    uniqueIndex('snapshots_sha256').on(t.sha256),
    uniqueIndex('snapshots_report_code').on(t.reportCode),
    uniqueIndex('snapshots_with_candidate').on(t.id, t.candidateId),
    ...checks('snapshots', {
      number: isCount(t.number, 1),
      sha256: isSha256(t.sha256),
      body: isJson(t.body, 268_435_456),
      program: isText(t.program, 64),
      created_at: isUtc(t.createdAt),
      report_code: isText(t.reportCode, 40, 8),
    }),
  ],
);

/** The events that a snapshot rests on: what is looked up when one of them changes, conflicts or is to be withdrawn. */
export const snapshotEvents = sqliteTable(
  'snapshot_events',
  {
    snapshotId: integer('snapshot_id')
      .notNull()
      .references(() => snapshots.id, { onDelete: 'restrict' }),
    triggerId: integer('trigger_id')
      .notNull()
      .references(() => triggers.id, { onDelete: 'restrict' }),
    eventVersion: integer('event_version').notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.snapshotId, t.triggerId] }),
    index('snapshot_events_of_trigger').on(t.triggerId),
    ...checks('snapshot_events', { event_version: isCount(t.eventVersion, 1) }),
  ],
);

/** Each time that something under a snapshot changed, and what it changed. Only ever added to. */
export const outOfDates = sqliteTable(
  'out_of_dates',
  {
    id: integer().primaryKey(),
    snapshotId: integer('snapshot_id')
      .notNull()
      .references(() => snapshots.id, { onDelete: 'restrict' }),
    at: text().notNull(),
    cause: text({ enum: ['clock-record', 'site', 'rule', 'frame', 'time-table', 'earth-table', 'late-record', 'conflict'] }).notNull(),
    /** JSON: each number, class or order that is another now. */
    differences: text().notNull(),
  },
  (t) => [
    index('out_of_dates_of_snapshot').on(t.snapshotId, t.id),
    ...checks('out_of_dates', {
      at: isUtc(t.at),
      cause: isOneOf(t.cause, ['clock-record', 'site', 'rule', 'frame', 'time-table', 'earth-table', 'late-record', 'conflict']),
      differences: isJson(t.differences, 16_777_216),
    }),
  ],
);

/** Who is asked to review a candidate. */
export const reviewers = sqliteTable(
  'reviewers',
  {
    candidateId: integer('candidate_id')
      .notNull()
      .references(() => candidates.id, { onDelete: 'restrict' }),
    personId: integer('person_id')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
    namedAt: text('named_at').notNull(),
    namedBy: integer('named_by')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
    /** NULL while it is asked. */
    releasedAt: text('released_at'),
  },
  (t) => [
    primaryKey({ columns: [t.candidateId, t.personId] }),
    // A reviewer's queue: what waits, since when.
    index('reviewers_queue')
      .on(t.personId, t.namedAt)
      .where(sql`released_at IS NULL`),
    ...checks('reviewers', { named_at: isUtc(t.namedAt), released_at: isUtc(t.releasedAt) }),
  ],
);

/**
 * A reviewer's decision on a snapshot, bound to its hash. Never edited: a later one supersedes it, or it is withdrawn within its first ten
 * minutes.
 */
export const signatures = sqliteTable(
  'signatures',
  {
    id: integer().primaryKey(),
    candidateId: integer('candidate_id').notNull(),
    snapshotId: integer('snapshot_id').notNull(),
    personId: integer('person_id')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
    /** The name as it was when it was signed. */
    name: text().notNull(),
    decision: text({ enum: ['confirm', 'dispute'] }).notNull(),
    reason: text().notNull(),
    /** That of the snapshot. */
    snapshotSha256: text('snapshot_sha256').notNull(),
    signedAt: text('signed_at').notNull(),
    /** SHA-256 over the signature, its decisions on claims, and the hash of the candidate's signature before it. */
    sha256: text().notNull(),
    previousSha256: text('previous_sha256'),
    withdrawnAt: text('withdrawn_at'),
    supersededById: integer('superseded_by_id').references((): AnySQLiteColumn => signatures.id, { onDelete: 'restrict' }),
  },
  (t) => [
    foreignKey({ columns: [t.snapshotId, t.candidateId], foreignColumns: [snapshots.id, snapshots.candidateId] }).onDelete('restrict'),
    // One that stands, of each person on each snapshot.
    uniqueIndex('signatures_standing')
      .on(t.snapshotId, t.personId)
      .where(sql`withdrawn_at IS NULL AND superseded_by_id IS NULL`),
    // All of a candidate, in their order.
    index('signatures_of_candidate').on(t.candidateId, t.id),
    // What a person has signed.
    index('signatures_of_person').on(t.personId, t.id),
    uniqueIndex('signatures_sha256').on(t.sha256),
    ...checks('signatures', {
      name: isText(t.name, 800),
      decision: isOneOf(t.decision, ['confirm', 'dispute']),
      reason: sql`${isText(t.reason, 16_384, 0)} AND (${t.decision} = 'confirm' OR ${t.reason} <> '')`,
      snapshot_sha256: isSha256(t.snapshotSha256),
      signed_at: isUtc(t.signedAt),
      sha256: isSha256(t.sha256),
      previous_sha256: isSha256(t.previousSha256),
      withdrawn_at: isUtc(t.withdrawnAt),
    }),
  ],
);

/** What a signature says of each claim. */
export const claimDecisions = sqliteTable(
  'claim_decisions',
  {
    signatureId: integer('signature_id')
      .notNull()
      .references(() => signatures.id, { onDelete: 'restrict' }),
    claimId: integer('claim_id')
      .notNull()
      .references(() => claims.id, { onDelete: 'restrict' }),
    decision: text({ enum: ['confirm', 'dispute'] }).notNull(),
    reason: text().notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.signatureId, t.claimId] }),
    ...checks('claim_decisions', {
      decision: isOneOf(t.decision, ['confirm', 'dispute']),
      reason: sql`${isText(t.reason, 16_384, 0)} AND (${t.decision} = 'confirm' OR ${t.reason} <> '')`,
    }),
  ],
);

/** What is said or asked of a candidate, of a claim, or of a pair. */
export const comments = sqliteTable(
  'comments',
  {
    id: integer().primaryKey(),
    candidateId: integer('candidate_id')
      .notNull()
      .references(() => candidates.id, { onDelete: 'restrict' }),
    claimId: integer('claim_id'),
    aTriggerId: integer('a_trigger_id').references(() => triggers.id, { onDelete: 'restrict' }),
    bTriggerId: integer('b_trigger_id').references(() => triggers.id, { onDelete: 'restrict' }),
    /** The comment that it answers. */
    answersId: integer('answers_id').references((): AnySQLiteColumn => comments.id, { onDelete: 'restrict' }),
    isQuestion: integer('is_question', { mode: 'boolean' }).notNull(),
    authorId: integer('author_id')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
    /** Empty once it is taken back. */
    body: text().notNull(),
    createdAt: text('created_at').notNull(),
    editedAt: text('edited_at'),
    takenBackAt: text('taken_back_at'),
    version: integer().notNull().default(1),
  },
  (t) => [
    foreignKey({ columns: [t.claimId, t.candidateId], foreignColumns: [claims.id, claims.candidateId] }).onDelete('restrict'),
    index('comments_of_candidate').on(t.candidateId, t.id),
    ...checks('comments', {
      pair: sql`${areTogether(t.aTriggerId, t.bTriggerId)} AND (${t.claimId} IS NULL OR ${t.aTriggerId} IS NULL)`,
      is_question: isFlag(t.isQuestion),
      body: sql`${isText(t.body, 16_384, 0)} AND (${t.body} = '') = (${t.takenBackAt} IS NOT NULL)`,
      created_at: isUtc(t.createdAt),
      edited_at: isUtc(t.editedAt),
      taken_back_at: isUtc(t.takenBackAt),
      version: isCount(t.version, 1),
    }),
  ],
);

/** Who is named in a comment, and is told by mail. */
export const mentions = sqliteTable(
  'mentions',
  {
    commentId: integer('comment_id')
      .notNull()
      .references(() => comments.id, { onDelete: 'restrict' }),
    personId: integer('person_id')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [primaryKey({ columns: [t.commentId, t.personId] })],
);

/** A file that belongs to a candidate. */
export const attachments = sqliteTable(
  'attachments',
  {
    id: integer().primaryKey(),
    candidateId: integer('candidate_id')
      .notNull()
      .references(() => candidates.id, { onDelete: 'restrict' }),
    commentId: integer('comment_id').references(() => comments.id, { onDelete: 'restrict' }),
    fileSha256: text('file_sha256')
      .notNull()
      .references(() => storedFiles.sha256, { onDelete: 'restrict' }),
    /** As its sender called it: shown, and never a path. */
    fileName: text('file_name').notNull(),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by')
      .notNull()
      .references(() => people.id, { onDelete: 'restrict' }),
    removedAt: text('removed_at'),
  },
  (t) => [
    index('attachments_of_candidate').on(t.candidateId, t.id),
    // Whether a file is still needed.
    index('attachments_of_file').on(t.fileSha256),
    ...checks('attachments', {
      file_name: isText(t.fileName, 255),
      created_at: isUtc(t.createdAt),
      removed_at: isUtc(t.removedAt),
    }),
  ],
);
