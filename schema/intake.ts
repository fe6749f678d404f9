import { sql } from 'drizzle-orm';
import {
  type AnySQLiteColumn,
  blob,
  foreignKey,
  index,
  integer,
  primaryKey,
  sqliteTable,
  text,
  uniqueIndex,
} from 'drizzle-orm/sqlite-core';
import { storedFiles } from './files';
import {
  areTogether,
  checks,
  isCode,
  isCodeOrEmpty,
  isCount,
  isHashBytes,
  isInstant,
  isJson,
  isOneOf,
  isSpan,
  isSumOf,
  isText,
  isUnixMs,
  isUtc,
  isWholeNumber,
} from './forms';
import { jobs } from './jobs';
import { networks, sites } from './networks';
import { people, siteKeys } from './people';
import { INTAKE_STATES, MOST_RECORD_BYTES, READING_FORMS, SET_ASIDE_WORDS, TRIGGER_KINDS } from './words';

/** Which column is what, kept by name for the next upload of the kind. */
export const columnMappings = sqliteTable(
  'column_mappings',
  {
    id: integer().primaryKey(),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    name: text().notNull(),
    /** JSON. */
    body: text().notNull(),
    version: integer().notNull().default(1),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    uniqueIndex('column_mappings_name').on(t.networkId, t.name),
    ...checks('column_mappings', {
      name: isText(t.name, 200),
      body: isJson(t.body, 65_536),
      version: isCount(t.version, 1),
      created_at: isUtc(t.createdAt),
    }),
  ],
);

/** An upload of one log file and what became of it. */
export const intakes = sqliteTable(
  'intakes',
  {
    id: integer().primaryKey(),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    /** NULL where the file names the site of each line. */
    siteId: integer('site_id'),
    fileSha256: text('file_sha256')
      .notNull()
      .references(() => storedFiles.sha256, { onDelete: 'restrict' }),
    fileName: text('file_name').notNull(),
    /** Whether the file holds triggers or live spans. */
    holds: text({ enum: ['triggers', 'live-spans'] }).notNull(),
    state: text({ enum: INTAKE_STATES }).notNull(),
    /** JSON; NULL until it is chosen. */
    mapping: text(),
    /** JSON: what the dry run found; NULL until it has run. */
    findings: text(),
    /** JSON: counts of lines by what became of them; NULL until it is imported. */
    result: text(),
    jobId: integer('job_id').references(() => jobs.id, { onDelete: 'set null' }),
    version: integer().notNull().default(1),
    createdAt: text('created_at').notNull(),
    createdBy: integer('created_by').references(() => people.id, { onDelete: 'restrict' }),
    importedAt: text('imported_at'),
    withdrawnAt: text('withdrawn_at'),
    withdrawnBy: integer('withdrawn_by').references(() => people.id, { onDelete: 'restrict' }),
  },
  (t) => [
    foreignKey({ columns: [t.siteId, t.networkId], foreignColumns: [sites.id, sites.networkId] }).onDelete('restrict'),
    // A network's list, newest first.
    index('intakes_of_network').on(t.networkId, t.id),
    // A site's list, newest first.
    index('intakes_of_site').on(t.siteId, t.id),
    // The same file twice is noticed.
    index('intakes_of_file').on(t.fileSha256),
    ...checks('intakes', {
      file_name: isText(t.fileName, 255),
      holds: isOneOf(t.holds, ['triggers', 'live-spans']),
      state: isOneOf(t.state, INTAKE_STATES),
      mapping: isJson(t.mapping, 65_536),
      findings: isJson(t.findings, 4_194_304),
      result: isJson(t.result, 4_194_304),
      version: isCount(t.version, 1),
      created_at: isUtc(t.createdAt),
      imported_at: isUtc(t.importedAt),
      withdrawn_at: isUtc(t.withdrawnAt),
      withdrawn: sql`(${t.state} = 'withdrawn') = (${t.withdrawnAt} IS NOT NULL)`,
    }),
  ],
);

/**
 * Every readable record as it came, and as a person mended it: only ever added to. Its identity is (site, series, sequence); a second content
 * under an identity is a row with the next `variant`. Which rows stand as events, and which are set aside, says their presence in `events` and in
 * `set_asides`.
 */
export const triggers = sqliteTable(
  'triggers',
  {
    id: integer().primaryKey(),
    siteId: integer('site_id')
      .notNull()
      .references((): AnySQLiteColumn => sites.id, { onDelete: 'restrict' }),
    /** The numbering, empty unless the site had to start anew. */
    series: text().notNull(),
    /** A whole number of any size, as digits without leading zeros: as text, so that one beyond 2^53 is still itself. */
    sequence: text().notNull(),
    /** 0 for the first content that came under the identity, then 1, 2, ... */
    variant: integer().notNull(),
    kind: text({ enum: TRIGGER_KINDS }).notNull(),
    /** As the site wrote it. */
    reading: text().notNull(),
    readingForm: text('reading_form', { enum: READING_FORMS }).notNull(),
    /** As the site wrote it, empty where it stated none. */
    sigma: text().notNull(),
    /** As the site wrote it, empty where it gave none. */
    amplitude: text().notNull(),
    /** JSON object of texts: further columns, and the sequence or kind where they were written otherwise; NULL for none. */
    extra: text(),
    /** SHA-256 over the content by column name: what tells the same record again from a conflict, and finds a flipped bit. */
    contentHash: blob('content_hash', { mode: 'buffer' }).notNull(),
    receivedAtMs: integer('received_at_ms').notNull(),
    /** NULL for what was streamed. */
    intakeId: integer('intake_id').references(() => intakes.id, { onDelete: 'restrict' }),
    /** The set-aside that it was mended from; NULL for what came so. */
    mendedFromId: integer('mended_from_id').references((): AnySQLiteColumn => setAsides.id, { onDelete: 'restrict' }),
  },
  (t) => [
    // Whether a record is known, and what an identity's contents are.
    uniqueIndex('triggers_identity').on(t.siteId, t.series, t.sequence, t.variant),
    // Withdrawing an intake as a whole.
    index('triggers_of_intake')
      .on(t.intakeId)
      .where(sql`intake_id IS NOT NULL`),
    // What a set-aside was mended to.
    index('triggers_mended')
      .on(t.mendedFromId)
      .where(sql`mended_from_id IS NOT NULL`),
    ...checks('triggers', {
      series: isCodeOrEmpty(t.series),
      sequence: isWholeNumber(t.sequence),
      variant: isCount(t.variant),
      kind: isOneOf(t.kind, TRIGGER_KINDS),
      reading: isText(t.reading, 200),
      reading_form: isOneOf(t.readingForm, READING_FORMS),
      sigma: isText(t.sigma, 400, 0),
      amplitude: isText(t.amplitude, 400, 0),
      extra: sql`${isText(t.extra, MOST_RECORD_BYTES, 2)} AND json_type(${t.extra}) = 'object'`,
      content_hash: isHashBytes(t.contentHash),
      received_at_ms: isUnixMs(t.receivedAtMs),
    }),
  ],
);

/**
 * A record that could not be accepted, verbatim, with the reason, and what a person decided of it. What came is never changed, and no row is
 * ever deleted.
 */
export const setAsides = sqliteTable(
  'set_asides',
  {
    id: integer().primaryKey(),
    networkId: integer('network_id')
      .notNull()
      .references(() => networks.id, { onDelete: 'restrict' }),
    /** NULL where the record's site is not known. */
    siteId: integer('site_id'),
    /** The numbering that it counts to, `*` where that could not be read. */
    series: text().notNull(),
    /** Its number, NULL where that could not be read. */
    sequence: text(),
    /** The record as a trigger, where it could be read as one (a conflict, before the clock record, outside the run, the future). */
    triggerId: integer('trigger_id').references(() => triggers.id, { onDelete: 'restrict' }),
    reason: text({ enum: SET_ASIDE_WORDS }).notNull(),
    /** What was wrong and what would be right, in words. */
    detail: text().notNull(),
    /** The record as it came. */
    verbatim: text().notNull(),
    contentHash: blob('content_hash', { mode: 'buffer' }).notNull(),
    receivedAtMs: integer('received_at_ms').notNull(),
    intakeId: integer('intake_id').references(() => intakes.id, { onDelete: 'restrict' }),
    /** The line of the file on which the record starts; the header is 1. */
    line: integer(),
    state: text({ enum: ['open', 'accepted', 'dismissed'] }).notNull(),
    /** When it is looked at again by itself, for a reading in the future. */
    retryAtMs: integer('retry_at_ms'),
    decidedAt: text('decided_at'),
    /** NULL where the program accepted it, since a clock record or a run now holds it. */
    decidedBy: integer('decided_by').references(() => people.id, { onDelete: 'restrict' }),
    /** Why it was decided so. */
    decision: text().notNull().default(''),
    version: integer().notNull().default(1),
  },
  (t) => [
    foreignKey({ columns: [t.siteId, t.networkId], foreignColumns: [sites.id, sites.networkId] }).onDelete('restrict'),
    // The queue of a network: the next open ones.
    index('set_asides_open')
      .on(t.networkId, t.id)
      .where(sql`state = 'open'`),
    // The same for one reason.
    index('set_asides_open_by_reason')
      .on(t.networkId, t.reason, t.id)
      .where(sql`state = 'open'`),
    // All of a site, newest first, and how many in the last hour.
    index('set_asides_of_site').on(t.siteId, t.receivedAtMs, t.id),
    // Those of an intake, in the order of its lines.
    index('set_asides_of_intake')
      .on(t.intakeId, t.line)
      .where(sql`intake_id IS NOT NULL`),
    // A record that was streamed again is known.
    uniqueIndex('set_asides_streamed_once')
      .on(t.siteId, t.contentHash, t.reason)
      .where(sql`intake_id IS NULL`),
    // What is set aside of an identity.
    index('set_asides_of_trigger')
      .on(t.triggerId)
      .where(sql`trigger_id IS NOT NULL`),
    // Those whose time has come.
    index('set_asides_to_retry')
      .on(t.retryAtMs)
      .where(sql`state = 'open' AND retry_at_ms IS NOT NULL`),
    ...checks('set_asides', {
      series: sql`${t.series} IN ('', '*') OR (${isCode(t.series)})`,
      sequence: isWholeNumber(t.sequence),
      reason: isOneOf(t.reason, SET_ASIDE_WORDS),
      detail: isText(t.detail, 1_000, 0),
      verbatim: isText(t.verbatim, MOST_RECORD_BYTES, 0),
      content_hash: isHashBytes(t.contentHash),
      received_at_ms: isUnixMs(t.receivedAtMs),
      line: isCount(t.line, 1),
      of_intake: areTogether(t.line, t.intakeId),
      state: isOneOf(t.state, ['open', 'accepted', 'dismissed']),
      retry_at_ms: isUnixMs(t.retryAtMs),
      decided_at: isUtc(t.decidedAt),
      decided: sql`(${t.state} = 'open') = (${t.decidedAt} IS NULL)`,
      dismissed: sql`${t.state} <> 'dismissed' OR (${t.decidedBy} IS NOT NULL AND ${t.decision} <> '')`,
      decision: isText(t.decision, 2_000, 0),
      version: isCount(t.version, 1),
    }),
  ],
);

/**
 * What came of each numbering of a site, counted in the transaction that stores it: received = stored + known + set aside + withdrawn, always.
 * `*` stands for records whose series could not be read.
 */
export const series = sqliteTable(
  'series',
  {
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id, { onDelete: 'restrict' }),
    series: text().notNull(),
    received: integer().notNull().default(0),
    /** Identities that stand. */
    stored: integer().notNull().default(0),
    /** The same again. */
    known: integer().notNull().default(0),
    setAside: integer('set_aside').notNull().default(0),
    /** Stored once, then withdrawn with their intake. */
    withdrawn: integer().notNull().default(0),
    /** The first number of the series; NULL until there is one. */
    first: text(),
    /** All numbers from the first to this one are held; NULL until there is one. */
    contiguous: text(),
    firstReceivedAtMs: integer('first_received_at_ms'),
    lastReceivedAtMs: integer('last_received_at_ms'),
  },
  (t) => [
    primaryKey({ columns: [t.siteId, t.series] }),
    ...checks('series', {
      series: sql`${t.series} IN ('', '*') OR (${isCode(t.series)})`,
      received: isCount(t.received),
      stored: isCount(t.stored),
      known: isCount(t.known),
      set_aside: isCount(t.setAside),
      withdrawn: isCount(t.withdrawn),
      conserved: isSumOf(t.received, t.stored, t.known, t.setAside, t.withdrawn),
      first: isWholeNumber(t.first),
      contiguous: isWholeNumber(t.contiguous),
      numbers: areTogether(t.first, t.contiguous),
      first_received_at_ms: isUnixMs(t.firstReceivedAtMs),
      last_received_at_ms: isUnixMs(t.lastReceivedAtMs),
    }),
  ],
);

/** The numbers that are held above a series' contiguous one, as ranges that do not touch: what lies between them is a gap. */
export const heldRanges = sqliteTable(
  'held_ranges',
  {
    siteId: integer('site_id').notNull(),
    series: text().notNull(),
    /** How many digits `first` has, so that whole numbers of any size sort as numbers. */
    firstDigits: integer('first_digits').notNull(),
    first: text().notNull(),
    last: text().notNull(),
    /** When the gap before it was noticed. */
    sinceMs: integer('since_ms').notNull(),
  },
  (t) => [
    primaryKey({ columns: [t.siteId, t.series, t.firstDigits, t.first] }),
    foreignKey({ columns: [t.siteId, t.series], foreignColumns: [series.siteId, series.series] }).onDelete('restrict'),
    ...checks('held_ranges', {
      first: isWholeNumber(t.first),
      last: isWholeNumber(t.last),
      first_digits: sql`${t.firstDigits} = length(${t.first})`,
      order: sql`(length(${t.first}), ${t.first}) <= (length(${t.last}), ${t.last})`,
      since_ms: isUnixMs(t.sinceMs),
    }),
  ],
);

/** The spans in which a site could trigger, both ends included. */
export const liveSpans = sqliteTable(
  'live_spans',
  {
    id: integer().primaryKey(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id, { onDelete: 'restrict' }),
    fromTaiS: integer('from_tai_s').notNull(),
    fromPs: integer('from_ps').notNull(),
    /** NULL while it goes on. */
    toTaiS: integer('to_tai_s'),
    toPs: integer('to_ps'),
    /** NULL for what was streamed. */
    intakeId: integer('intake_id').references(() => intakes.id, { onDelete: 'restrict' }),
    receivedAtMs: integer('received_at_ms').notNull(),
    /** Withdrawn with its intake. */
    withdrawnAt: text('withdrawn_at'),
  },
  (t) => [
    // The spans of a site within a time; said twice is said once.
    uniqueIndex('live_spans_of_site')
      .on(t.siteId, t.fromTaiS, t.fromPs)
      .where(sql`withdrawn_at IS NULL`),
    // Withdrawing an intake as a whole.
    index('live_spans_of_intake')
      .on(t.intakeId)
      .where(sql`intake_id IS NOT NULL`),
    ...checks('live_spans', {
      from: isInstant(t.fromTaiS, t.fromPs),
      to: isInstant(t.toTaiS, t.toPs),
      span: isSpan(t.fromTaiS, t.fromPs, t.toTaiS, t.toPs),
      received_at_ms: isUnixMs(t.receivedAtMs),
      withdrawn_at: isUtc(t.withdrawnAt),
    }),
  ],
);

/** How far a site's stream has come: one row a site, made with it. */
export const siteStreams = sqliteTable(
  'site_streams',
  {
    siteId: integer('site_id')
      .primaryKey()
      .references(() => sites.id, { onDelete: 'restrict' }),
    /** The instant before which the site says that it has sent all it has; never goes back. NULL until it has said one. */
    completeTaiS: integer('complete_tai_s'),
    completePs: integer('complete_ps'),
    completeSaidAtMs: integer('complete_said_at_ms'),
    lastReceivedAtMs: integer('last_received_at_ms'),
    /** The latest event. */
    lastTaiS: integer('last_tai_s'),
    lastPs: integer('last_ps'),
    /** From when the present connection is; NULL while there is none. */
    connectedAtMs: integer('connected_at_ms'),
    /** Its operators were told of its silence, or of its set-asides, and not yet that it is over. */
    silenceToldAtMs: integer('silence_told_at_ms'),
    setAsidesToldAtMs: integer('set_asides_told_at_ms'),
  },
  (t) => [
    ...checks('site_streams', {
      complete: isInstant(t.completeTaiS, t.completePs),
      complete_said_at_ms: isUnixMs(t.completeSaidAtMs),
      last_received_at_ms: isUnixMs(t.lastReceivedAtMs),
      last: isInstant(t.lastTaiS, t.lastPs),
      connected_at_ms: isUnixMs(t.connectedAtMs),
      silence_told_at_ms: isUnixMs(t.silenceToldAtMs),
      set_asides_told_at_ms: isUnixMs(t.setAsidesToldAtMs),
    }),
  ],
);

/** Each connection of a site's stream, for the page that shows how it holds. */
export const siteConnections = sqliteTable(
  'site_connections',
  {
    id: integer().primaryKey(),
    siteId: integer('site_id')
      .notNull()
      .references(() => sites.id, { onDelete: 'restrict' }),
    /** The key that it came with. */
    keyId: integer('key_id').references((): AnySQLiteColumn => siteKeys.id, { onDelete: 'restrict' }),
    fromMs: integer('from_ms').notNull(),
    /** NULL while it holds. */
    toMs: integer('to_ms'),
    /** Why it ended; empty while it holds. */
    ended: text().notNull().default(''),
  },
  (t) => [
    index('site_connections_of_site').on(t.siteId, t.id),
    ...checks('site_connections', {
      from_ms: isUnixMs(t.fromMs),
      to_ms: sql`${t.toMs} BETWEEN ${t.fromMs} AND 253402300799999`,
      ended: isText(t.ended, 200, 0),
    }),
  ],
);
