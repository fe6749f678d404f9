import * as z from 'zod';
import { instant, listOf, numberThat, oneOf, record, text } from './leaves';
import { line } from './people';

/** Where sites stream to: a socket.io path of its own, over WebSocket alone. */
export const SITE_STREAM_PATH = '/site-stream';

/** The version of the messages below; a server answers another one with a refusal that says which it speaks. */
export const SITE_PROTOCOL = 1;

/** What no message of a site's stream may exceed; a site is told of them at its hello. */
export const SITE_LIMITS = {
  /** Of a whole message on the wire; beyond it the link is cut. */
  messageBytes: 512 * 1024,
  /** Of the attachment of a batch, or of its rows as JSON without blanks. */
  batchBytes: 256 * 1024,
  batchRecords: 1_000,
  /** Of one text of a record, in UTF-8. */
  textBytes: 65_535,
  /** Of all texts of a batch once each row has its own. */
  unpackedBytes: 1024 * 1024,
  /** Columns beyond those that mean something. */
  extraColumns: 64,
  columnNameBytes: 100,
  /** Live spans in one state. */
  spans: 100,
} as const;

const MOST_SOFTWARE_CHARACTERS = 100;

/** A name of a further column that a record may have. */
export const isColumnName = (name: string): boolean => name !== '' && name !== '__proto__';

const LONE_SURROGATE = /\p{Cs}/u;
const TEXT_RIGHT = `a text of at most ${SITE_LIMITS.textBytes} characters (whole Unicode characters; numbers too are written as text, such as "17")`;
const isVerbatim = (value: unknown): boolean =>
  typeof value === 'string' && value.length <= SITE_LIMITS.textBytes && !LONE_SURROGATE.test(value);
const verbatim = () => z.custom<string>(isVerbatim, { error: TEXT_RIGHT });

const NAMES_RIGHT = `an object of at most ${SITE_LIMITS.extraColumns} texts by the name of their column, of 1 to ${SITE_LIMITS.columnNameBytes} characters and not __proto__`;
/** Looked at by hand: zod would leave out a column named __proto__ without a word. */
const extra = () => z.custom<Readonly<Record<string, string>>>(isExtra, { error: NAMES_RIGHT });

function isExtra(value: unknown): boolean {
  if (typeof value !== 'object' || value === null || Array.isArray(value)) return false;
  const columns = Object.entries(value);
  return (
    columns.length <= SITE_LIMITS.extraColumns &&
    columns.every(([name, cell]) => isColumnName(name) && name.length <= SITE_LIMITS.columnNameBytes && isVerbatim(cell))
  );
}

/** A record as plain JSON: what is absent is empty. */
export const siteRow = record({
  series: verbatim().optional(),
  sequence: verbatim(),
  kind: verbatim().optional(),
  reading: verbatim(),
  readingForm: oneOf('iso', 'tai-pair').optional(),
  sigmaNs: verbatim().optional(),
  amplitude: verbatim().optional(),
  extra: extra().optional(),
});

const countFrom = (least: number, right: string) => numberThat(right, (value) => Number.isSafeInteger(value) && value >= least);

/** The first message of every connection. */
export const siteHello = record({
  protocol: countFrom(0, `the version of the protocol: ${SITE_PROTOCOL}`),
  /** Name and version of what sends, for whoever looks after the site. */
  software: line(MOST_SOFTWARE_CHARACTERS),
});

/** Records, either packed as `record-batch.ts` says or as rows. Its number is the sender's own and comes back with the answer. */
export const siteBatch = record({
  number: countFrom(0, 'a whole number, 0 or more'),
  packed: z.custom<Uint8Array>((value) => value instanceof Uint8Array, { error: 'one binary attachment' }).optional(),
  rows: listOf(siteRow, 'records')
    .min(1, `1 to ${SITE_LIMITS.batchRecords} records`)
    .max(SITE_LIMITS.batchRecords, `1 to ${SITE_LIMITS.batchRecords} records`)
    .optional(),
}).refine(({ packed, rows }) => (packed === undefined) !== (rows === undefined), {
  path: ['packed'],
  error: 'there without rows, or rows without it',
});

/** What a site says of itself, also when it has no triggers. */
export const siteState = record({
  /** It has sent all it has before this instant. */
  completeTo: instant().optional(),
  /** Spans in which it can trigger: one that goes on has no end yet, and is said again with its end. */
  live: listOf(record({ from: instant(), to: instant().nullable() }), 'spans { "from", "to" }')
    .max(SITE_LIMITS.spans, `at most ${SITE_LIMITS.spans} spans`)
    .optional(),
});

/** The requests of a site by their names, each of which is also the name of its policy. */
export const SITE_REQUESTS = { 'stream:hello': siteHello, 'stream:batch': siteBatch, 'stream:state': siteState } as const;
export type SiteRequestName = keyof typeof SITE_REQUESTS;

/** Records and bytes that a site may still send: each grant adds to what is left of the former ones, each batch takes its own away. */
export const siteCredit = z.strictObject({ records: z.int().min(0), bytes: z.int().min(0) });

/**
 * Why something was not done. `refused` and `protocol` end the stream for good; `busy` and `unknown` say to send it again later; `unusable`
 * that the message is not as it must be; `hello-first` and `past-credit` that it came before its time.
 */
export const SITE_REFUSALS = ['refused', 'protocol', 'busy', 'unknown', 'unusable', 'hello-first', 'past-credit'] as const;
export type SiteRefusalCode = (typeof SITE_REFUSALS)[number];

export const siteRefusal = z.strictObject({
  ok: z.literal(false),
  code: z.enum(SITE_REFUSALS),
  /** In words: what was wrong and what would be right. */
  text: z.string(),
  /** How long to wait before the next attempt, at least. */
  retryAfterMs: z.int().min(0).optional(),
});

const range = z.strictObject({ first: z.string(), last: z.string() });

/** What the server holds of a numbering: all from `first` to `contiguous`, and the ranges above. */
export const heldSeries = z.strictObject({
  series: z.string(),
  first: z.string().nullable(),
  contiguous: z.string().nullable(),
  held: z.array(range),
});

export const siteWelcome = z.strictObject({
  ok: z.literal(true),
  protocol: z.int(),
  site: z.string(),
  network: z.string(),
  /** The scale of the site's readings, such as UTC. */
  scale: z.string(),
  series: z.array(heldSeries),
  /** Whether there is more than `series` says: what is not in it may be held all the same. */
  more: z.boolean(),
  completeTo: instant().nullable(),
  limits: z.strictObject({ batchRecords: z.int().min(1), batchBytes: z.int().min(1) }),
  credit: siteCredit,
});

/** Rows of a batch as runs: [the first row, how many]. */
const runs = z.array(z.tuple([z.int().min(0), z.int().min(1)]));

/** What became of each row of a batch: every row is in exactly one of the lists. */
export const siteFates = z.strictObject({
  ok: z.literal(true),
  number: z.int(),
  stored: runs,
  known: runs,
  setAside: z.array(z.strictObject({ row: z.int().min(0), reason: z.string(), detail: z.string() })),
  /** To be sent again. */
  unknown: runs,
  /** Granted with this answer. */
  credit: siteCredit,
});

export const siteStateKept = z.strictObject({ ok: z.literal(true), completeTo: instant().nullable() });

/** News of the server: more credit; the end of the stream for good; the end for now. */
export const SITE_NEWS = {
  'stream:credited': siteCredit,
  'stream:refused': z.strictObject({ text: z.string() }),
  'stream:ended': z.strictObject({ text: z.string(), retryAfterMs: z.int().min(0) }),
} as const;
export type SiteNewsName = keyof typeof SITE_NEWS;

/** What comes with a connection that was not let in, as `data` of the error. */
export const siteConnectRefusal = siteRefusal.omit({ ok: true });

/** What a key is shown in: the `auth` of the connection, never its address. */
export const siteAuth = z.object({ key: text('the key of a site, as "swk_..."') });

export type SiteRow = z.infer<typeof siteRow>;
export type SiteHello = z.infer<typeof siteHello>;
export type SiteBatch = z.infer<typeof siteBatch>;
export type SiteState = z.infer<typeof siteState>;
export type SiteCredit = z.infer<typeof siteCredit>;
export type SiteRefusal = z.infer<typeof siteRefusal>;
export type HeldSeries = z.infer<typeof heldSeries>;
export type SiteWelcome = z.infer<typeof siteWelcome>;
export type SiteFates = z.infer<typeof siteFates>;
export type SiteStateKept = z.infer<typeof siteStateKept>;
export type Runs = z.infer<typeof runs>;
