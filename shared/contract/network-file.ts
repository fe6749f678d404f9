import * as z from 'zod';
import { type Outcome, valueOf } from '../outcome';
import { SCALES } from '../time/scales';
import { code, listOf, notNegative, numberThat, oneOf, record, text, triple } from './leaves';
import { firstProblem } from './first-problem';

/**
 * The network file of the batch command: its form. What its parts refer to (clocks, references, sites, frames) and what its times say is
 * checked where the network is built.
 */

const TIME = 'a time such as 2026-03-01T00:00:00Z or 2026-03-01T00:00:00 TAI';
const time = () => text(TIME);
const nanoseconds = () => numberThat('a number of nanoseconds');

const segment = record({
  from: time(),
  at: time().optional(),
  offset_ns: nanoseconds(),
  offset_sigma_ns: notNegative('nanoseconds'),
  rate_ns_per_day: numberThat('a number of nanoseconds a day').optional(),
  rate_sigma_ns_per_day: notNegative('nanoseconds a day').optional(),
  covariance_ns2_per_day: numberThat('a number of ns^2 a day').optional(),
  reference: code().optional(),
}).check((context) => {
  const { rate_ns_per_day, rate_sigma_ns_per_day, covariance_ns2_per_day, offset_sigma_ns } = context.value;
  if (rate_ns_per_day !== undefined && rate_sigma_ns_per_day === undefined)
    context.issues.push(missing(context.value, 'rate_sigma_ns_per_day', 'stated with rate_ns_per_day: nanoseconds a day, 0 or more'));
  const most = offset_sigma_ns * (rate_sigma_ns_per_day ?? 0);
  if (Math.abs(covariance_ns2_per_day ?? 0) > most * (1 + 1e-9))
    context.issues.push({
      code: 'custom',
      input: covariance_ns2_per_day,
      path: ['covariance_ns2_per_day'],
      message: `at most offset_sigma_ns x rate_sigma_ns_per_day in size (${most})`,
    });
});

const position = record({
  geodetic: record({
    latitude_deg: numberThat('degrees from -90 to 90', (value) => Math.abs(value) <= 90),
    longitude_deg: numberThat('degrees from -360 to 360', (value) => Math.abs(value) <= 360),
    height_m: numberThat('metres above the ellipsoid').optional(),
  }).optional(),
  itrs_m: triple('a list of three numbers: Earth-fixed x, y, z in metres', 'a number of metres').optional(),
}).refine(({ geodetic, itrs_m }) => (geodetic === undefined) !== (itrs_m === undefined), {
  error: 'either "geodetic" or "itrs_m", and not both',
});

const site = record({
  code: code(),
  name: text('a text').optional(),
  scale: oneOf(...SCALES),
  clock: code(),
  position,
  position_sigma_m: notNegative('metres').optional(),
  delay_ns: nanoseconds().optional(),
  delay_sigma_ns: notNegative('nanoseconds').optional(),
  reading_sigma_ns: notNegative('nanoseconds').optional(),
}).check((context) => {
  if (context.value.delay_ns !== undefined && context.value.delay_sigma_ns === undefined)
    context.issues.push(missing(context.value, 'delay_sigma_ns', 'stated with delay_ns: nanoseconds, 0 or more'));
});

const toward = record({
  ra_deg: numberThat('degrees from -360 to 360', (value) => Math.abs(value) <= 360).optional(),
  dec_deg: numberThat('degrees from -90 to 90', (value) => Math.abs(value) <= 90).optional(),
  baseline: z
    .custom<readonly [string, string]>(
      (value) => Array.isArray(value) && value.length === 2 && value.every((part) => typeof part === 'string'),
      { error: 'a list of two site codes, from the first to the second' },
    )
    .optional(),
}).refine(
  ({ ra_deg, dec_deg, baseline }) =>
    baseline === undefined ? ra_deg !== undefined && dec_deg !== undefined : ra_deg === undefined && dec_deg === undefined,
  { error: 'either both "ra_deg" and "dec_deg", or "baseline"' },
);

const speed = (unit: string) => notNegative(unit).optional();

/** A frame's velocity in its parent, in the words and units in which a person states it. */
export const statedVelocity = record({
  beta: triple('a list of three numbers in c', 'a number in c').optional(),
  speed_c: speed('c'),
  speed_km_s: speed('km/s'),
  rapidity: speed('rapidity'),
  toward: toward.optional(),
})
  .refine(
    ({ beta, speed_c, speed_km_s, rapidity }) => [beta, speed_c, speed_km_s, rapidity].filter((given) => given !== undefined).length === 1,
    { error: 'one of "beta", "speed_c", "speed_km_s", "rapidity"' },
  )
  .refine((value) => (value.beta === undefined) === (value.toward !== undefined), {
    error: '"beta" alone, or a speed with "toward"',
  });

const frame = record({
  code: code(),
  name: text('a text').optional(),
  parent: code().optional(),
  kind: oneOf('barycentric').optional(),
  velocity: statedVelocity.optional(),
  at: oneOf('event', 'origin').optional(),
}).refine((value) => (value.kind === undefined) !== (value.velocity === undefined), {
  error: 'with "velocity", or of "kind" "barycentric", and not both',
});

const WINDOW_KINDS = '"light-time" or "fixed"';

const window = z.discriminatedUnion(
  'kind',
  [
    record({
      kind: z.literal('light-time'),
      speed_c: numberThat('a speed in c above 0', (value) => value > 0).optional(),
      margin_ns: notNegative('nanoseconds').optional(),
    }),
    record({ kind: z.literal('fixed'), width_ns: notNegative('nanoseconds'), frame: code().optional() }),
  ],
  { error: ({ input }) => (typeof input === 'object' && input !== null ? WINDOW_KINDS : `an object { } with "kind" ${WINDOW_KINDS}`) },
);

const rule = record({
  code: code(),
  minimum_fold: numberThat('a whole number, at least 2', (value) => Number.isInteger(value) && value >= 2).optional(),
  sigmas: numberThat('a number of standard errors, 0 or more', (value) => value >= 0).optional(),
  window,
});

export const networkFileSchema = record({
  network: text('a text: the name of the network'),
  run: record({ name: text('a text').optional(), from: time(), to: time().optional() }),
  origin: record({ time: time().optional() }).optional(),
  references: listOf(record({ code: code(), sigma_ns: notNegative('nanoseconds').optional() }), 'references').optional(),
  clocks: listOf(
    record({ code: code(), segments: listOf(segment, 'clock segments').min(1, { error: 'a list with at least one segment' }) }),
    'clocks',
  ).optional(),
  sites: listOf(site, 'sites'),
  frames: listOf(frame, 'frames').optional(),
  rule,
  neighbours: record({ within_ns: notNegative('nanoseconds') }).optional(),
  selections: listOf(
    record({ code: code(), events: listOf(text('the name of an event, such as ORL:17'), 'names of events') }),
    'selections',
  ).optional(),
});

export type StatedVelocity = z.infer<typeof statedVelocity>;

/** The network file, in its own names and units. */
export type NetworkFile = z.infer<typeof networkFileSchema>;

/**
 * Checks the form of a network file.
 *
 * @param input what JSON.parse made of it
 * @returns the file; or the problem `network-form` with the path of the field, its value and what would be right
 */
export function parseNetworkFile(input: unknown): Outcome<NetworkFile> {
  const result = networkFileSchema.safeParse(input);
  return result.success ? valueOf(result.data) : firstProblem(result.error, input, 'network-form');
}

function missing(input: unknown, field: string, right: string) {
  return { code: 'custom' as const, input, path: [field], message: right };
}
