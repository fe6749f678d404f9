import * as z from 'zod';
import { code, instant, listOf, numberThat, record } from './leaves';
import { networkParams } from './network-routes';
import { idText, pageOf, pageQuery } from './page';
import { utc, versionSeen } from './people';
import { route } from './routes';
import { edit, between, idOf, nameOrEmpty, setupNote, timeGiven, wholeNumber, withWarnings } from './setup-leaves';

const MOST_WINDOW_NS = 1e11; // 100 s: light needs 0.04 s across the Earth
const LEAST_SPEED_C = 1e-3;
const MOST_SPEED_C = 1e6;
const MOST_SIGMAS = 100;
const MOST_FOLD = 200;
const MOST_CROWD = 10_000;
const MOST_DEAD_TIME_NS = 8.64e13; // a day
const MOST_EXCLUSIONS = 1_000;
const MOST_SITES = 200;

const ruleParams = z.strictObject({ ruleId: idText });
const WINDOW_KINDS = '"light-time" or "fixed"';

/** When two triggers of different sites are near: by light-time and error, or within a width in a frame. */
export const ruleWindowGiven = z.discriminatedUnion(
  'kind',
  [
    record({
      kind: z.literal('light-time'),
      /** 1 unless given. */
      speedC: between(LEAST_SPEED_C, MOST_SPEED_C, 'c').optional(),
      /** 0 unless given. */
      marginNs: between(0, MOST_WINDOW_NS, 'nanoseconds').optional(),
    }),
    record({
      kind: z.literal('fixed'),
      widthNs: between(0, MOST_WINDOW_NS, 'nanoseconds'),
      /** Null, or absent, for the geocentric one. */
      frameId: idOf('a frame of this network, or null for the geocentric one').nullable().optional(),
    }),
  ],
  { error: ({ input }) => (typeof input === 'object' && input !== null ? WINDOW_KINDS : `an object { } with "kind" ${WINDOW_KINDS}`) },
);

/** What a rule says. */
export const ruleStateGiven = record({
  /** Least number of sites; 2 unless given. */
  minimumFold: wholeNumber(2, MOST_FOLD).optional(),
  /** Standard errors that make a decision; 3 unless given. */
  sigmas: between(0, MOST_SIGMAS, 'standard errors').optional(),
  window: ruleWindowGiven,
  /** Triggers below it take no part; null for none. */
  leastAmplitude: numberThat('a number, or null').nullable().optional(),
  /** After a trigger a site's next ones take no part for so long. */
  deadTimeNs: between(0, MOST_DEAD_TIME_NS, 'nanoseconds').optional(),
  /** An event that is the earliest of more sets than this is crowded. */
  crowdLimit: wholeNumber(1, MOST_CROWD).optional(),
  /** The sites that it is for; none for all. */
  siteIds: listOf(idOf('a site of this network'), 'ids of sites')
    .max(MOST_SITES, `a list of at most ${MOST_SITES} ids of sites`)
    .optional(),
  /** Periods that it leaves out, both ends included, at one site or, with null, at all. */
  exclusions: listOf(
    record({
      siteId: idOf('a site of this network, or null for all').nullable(),
      from: timeGiven(),
      to: timeGiven(),
      reason: setupNote(),
    }),
    'exclusions',
  )
    .max(MOST_EXCLUSIONS, `a list of at most ${MOST_EXCLUSIONS} exclusions`)
    .optional(),
});

const ruleState = z.strictObject({
  id: z.int(),
  number: z.int(),
  minimumFold: z.int(),
  sigmas: z.number(),
  window: z.discriminatedUnion('kind', [
    z.strictObject({ kind: z.literal('light-time'), speedC: z.number(), marginNs: z.number() }),
    z.strictObject({ kind: z.literal('fixed'), widthNs: z.number(), frameId: z.int().nullable() }),
  ]),
  leastAmplitude: z.number().nullable(),
  deadTimeNs: z.number(),
  crowdLimit: z.int(),
  siteIds: z.array(z.int()),
  exclusions: z.array(z.strictObject({ siteId: z.int().nullable(), from: instant(), to: instant(), reason: z.string() })),
  createdAt: utc(),
  createdBy: z.int().nullable(),
  supersededAt: utc().nullable(),
});

/** A coincidence rule as it is in force. */
export const rule = z.strictObject({
  id: z.int(),
  networkId: z.int(),
  code: z.string(),
  name: z.string(),
  isActive: z.boolean(),
  version: z.int(),
  createdAt: utc(),
  now: ruleState,
});

/** Coincidences are found by the rules that are active. What one says is stated anew as another version, whole. */
export const RULE_ROUTES = {
  listRules: route('GET', '/networks/:networkId/rules', {
    policy: 'rule:list',
    params: networkParams,
    query: record(pageQuery),
    answer: pageOf(rule),
  }),
  readRule: route('GET', '/rules/:ruleId', { policy: 'rule:read', params: ruleParams, answer: rule }),
  /** Every version of a rule, latest first. */
  listRuleVersions: route('GET', '/rules/:ruleId/versions', {
    policy: 'rule:read-history',
    params: ruleParams,
    query: record(pageQuery),
    answer: pageOf(ruleState),
  }),
  /** Not active until it is made so. */
  makeRule: route('POST', '/networks/:networkId/rules', {
    policy: 'rule:make',
    params: networkParams,
    body: record({ code: code(), name: nameOrEmpty().optional(), state: ruleStateGiven }),
    answer: rule.extend(withWarnings),
    makes: true,
  }),
  changeRule: route('PATCH', '/rules/:ruleId', {
    policy: 'rule:change',
    params: ruleParams,
    body: edit({ name: nameOrEmpty().optional(), state: ruleStateGiven.optional() }),
    answer: rule.extend(withWarnings),
  }),
  activateRule: route('POST', '/rules/:ruleId/activate', {
    policy: 'rule:activate',
    params: ruleParams,
    body: versionSeen(),
    answer: rule,
  }),
  deactivateRule: route('POST', '/rules/:ruleId/deactivate', {
    policy: 'rule:deactivate',
    params: ruleParams,
    body: versionSeen(),
    answer: rule,
  }),
};

export type Rule = z.infer<typeof rule>;
export type RuleState = z.infer<typeof ruleState>;
export type RuleWindowGiven = z.infer<typeof ruleWindowGiven>;
