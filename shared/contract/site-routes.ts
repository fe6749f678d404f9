import * as z from 'zod';
import { SCALES } from '../time/scales';
import { code, instant, numberThat, oneOf, record, triple } from './leaves';
import { networkParams } from './network-routes';
import { idText, pageOf, pageQuery } from './page';
import { utc, version, versionSeen } from './people';
import { route } from './routes';
import { edit, between, flag, idOf, nameOrEmpty, setupNote, timeGiven, wholeNumber, withWarnings } from './setup-leaves';

const MOST_DELAY_NS = 1e9;
const MOST_SIGMA_NS = 1e15; // 11 days: worse than any clock that is read at all
const MOST_POSITION_SIGMA_M = 1e6;
const MOST_SILENT_S = 366 * 86_400;
const MOST_SET_ASIDES = 1_000_000_000;
const ORIGINS = ['survey', 'certificate', 'by-hand', 'fit', 'import'] as const;

const siteParams = z.strictObject({ siteId: idText });

/** Where a site stands, in both forms; `stated` says which of them is exact. Height above the WGS 84 ellipsoid. */
export const sitePosition = z.strictObject({
  stated: z.enum(['geodetic', 'itrs']),
  geodetic: z.strictObject({ latitudeDeg: z.number(), longitudeDeg: z.number(), heightM: z.number() }),
  itrsM: z.tuple([z.number(), z.number(), z.number()]),
});

/** A site's place as it is stated: in one form alone. How high it may be is judged by the server. */
export const positionGiven = record({
  geodetic: record({
    latitudeDeg: numberThat('degrees from -90 to 90 (is it the longitude?)', (value) => Math.abs(value) <= 90),
    longitudeDeg: numberThat('degrees from -360 to 360', (value) => Math.abs(value) <= 360),
    heightM: numberThat('metres above the WGS 84 ellipsoid'),
  }).optional(),
  itrsM: triple('a list of three numbers: Earth-fixed x, y, z in metres', 'a number of metres').optional(),
}).refine(({ geodetic, itrsM }) => (geodetic === undefined) !== (itrsM === undefined), {
  error: 'either "geodetic" or "itrsM", and not both',
});

/** What a site's readings are reconciled by. Each error is stated: ignorance is never 0. */
const siteState = {
  /** Holds from here on; null for ever. */
  from: timeGiven().nullable(),
  scale: oneOf(...SCALES),
  /** Null with `exactClock`, which declares on purpose that there is no error. */
  clockId: idOf('a clock of this network, or null with "exactClock": true').nullable(),
  exactClock: flag('true for a clock that is declared exact ("clockId" null), else false'),
  position: positionGiven,
  /** Standard error of each axis. */
  positionSigmaM: between(0, MOST_POSITION_SIGMA_M, 'metres'),
  /** From detector to clock. */
  delayNs: between(-MOST_DELAY_NS, MOST_DELAY_NS, 'nanoseconds'),
  delaySigmaNs: between(0, MOST_SIGMA_NS, 'nanoseconds'),
  /** One standard error of a reading that states none; null where the written resolution says it. */
  readingSigmaNs: between(0, MOST_SIGMA_NS, 'nanoseconds').nullable(),
  origin: oneOf(...ORIGINS),
  note: setupNote(),
};

const clockOrExact = ({ clockId, exactClock }: { readonly clockId: number | null; readonly exactClock: boolean }) =>
  (clockId === null) === exactClock;
const CLOCK_RIGHT = { path: ['clockId'], error: 'the id of a clock with "exactClock": false, or null with "exactClock": true' };

export const siteStateGiven = record(siteState).refine(clockOrExact, CLOCK_RIGHT);

/** A state of a site as it was stated, for good; in force while `supersededAt` is null. */
export const siteVersion = z.strictObject({
  id: z.int(),
  number: z.int(),
  from: instant().nullable(),
  scale: z.enum([...SCALES, 'proper']),
  clockId: z.int().nullable(),
  exactClock: z.boolean(),
  /** Null for a platform. */
  position: sitePosition.nullable(),
  positionSigmaM: z.number(),
  delayNs: z.number(),
  delaySigmaNs: z.number(),
  readingSigmaNs: z.number().nullable(),
  origin: z.enum(ORIGINS),
  note: z.string(),
  createdAt: utc(),
  createdBy: z.int().nullable(),
  supersededAt: utc().nullable(),
});

/** How far a site's stream has come. */
export const siteStream = z.strictObject({
  connectedSince: utc().nullable(),
  lastReceivedAt: utc().nullable(),
  lastEvent: instant().nullable(),
  completeUpTo: instant().nullable(),
});

/** A site as lists have it. */
const siteBrief = z.strictObject({
  id: z.int(),
  networkId: z.int(),
  code: z.string(),
  name: z.string(),
  closedAt: utc().nullable(),
  /** Where it stands now; null for a platform. */
  position: sitePosition.nullable(),
  details: z.strictObject({ now: siteVersion.nullable(), clockCode: z.string().nullable(), stream: siteStream, version: z.int() }),
});

/** A site with every state that it ever had, latest stated first. */
export const site = z.strictObject({
  id: z.int(),
  networkId: z.int(),
  code: z.string(),
  name: z.string(),
  silentAfterS: z.int().nullable(),
  setAsidesPerHour: z.int().nullable(),
  version: z.int(),
  createdAt: utc(),
  closedAt: utc().nullable(),
  stream: siteStream,
  /** The state that holds at present; null before the first begins. */
  now: siteVersion.nullable(),
  versions: z.array(siteVersion),
});

const limits = {
  silentAfterS: wholeNumber(1, MOST_SILENT_S).nullable().optional(),
  setAsidesPerHour: wholeNumber(1, MOST_SET_ASIDES).nullable().optional(),
};

/** An operator sees their own sites alone: every other looks as if it were not. */
export const SITE_ROUTES = {
  listSites: route('GET', '/networks/:networkId/sites', {
    policy: 'site:list',
    params: networkParams,
    query: record(pageQuery),
    answer: pageOf(siteBrief),
  }),
  readSite: route('GET', '/sites/:siteId', { policy: 'site:read', params: siteParams, answer: site }),
  makeSite: route('POST', '/networks/:networkId/sites', {
    policy: 'site:make',
    params: networkParams,
    body: record({ code: code(), name: nameOrEmpty().optional(), ...limits, state: siteStateGiven }),
    answer: site.extend(withWarnings),
    makes: true,
  }),
  changeSite: route('PATCH', '/sites/:siteId', {
    policy: 'site:change',
    params: siteParams,
    body: edit({ name: nameOrEmpty().optional(), ...limits }),
    answer: site,
  }),
  /** Takes the place of the state that `replaces` numbers; without it, of one in force with the same `from`, or of none. */
  addSiteVersion: route('POST', '/sites/:siteId/versions', {
    policy: 'site:add-version',
    params: siteParams,
    body: record({ ...siteState, replaces: idOf('a state in force, by its number').optional(), version: version() }).refine(
      clockOrExact,
      CLOCK_RIGHT,
    ),
    answer: site.extend(withWarnings),
    makes: true,
  }),
  closeSite: route('POST', '/sites/:siteId/close', {
    policy: 'site:close',
    params: siteParams,
    body: versionSeen(),
    answer: site,
  }),
};

export type Site = z.infer<typeof site>;
export type SiteVersion = z.infer<typeof siteVersion>;
export type SitePosition = z.infer<typeof sitePosition>;
export type SiteStream = z.infer<typeof siteStream>;
export type PositionGiven = z.infer<typeof positionGiven>;
