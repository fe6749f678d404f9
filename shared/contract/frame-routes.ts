import * as z from 'zod';
import { type StatedVelocity } from './network-file';
import { code, instant, numberThat, oneOf, record, triple } from './leaves';
import { networkParams } from './network-routes';
import { idText, pageOf, pageQuery } from './page';
import { utc, versionSeen } from './people';
import { route } from './routes';
import { edit, idOf, nameOrEmpty, wholeNumber } from './setup-leaves';

const MOST_PINNED = 20;
const frameParams = z.strictObject({ frameId: idText });

const speeds = {
  speedC: numberThat('a speed in c, 0 or more and below 1', (value) => value >= 0 && value < 1).optional(),
  speedKmS: numberThat('a speed in km/s, 0 or more and below 299792.458', (value) => value >= 0 && value < 299_792.458).optional(),
  rapidity: numberThat('a rapidity from 0 to 300', (value) => value >= 0 && value <= 300).optional(),
};

interface Speeds {
  readonly speedC?: number | undefined;
  readonly speedKmS?: number | undefined;
  readonly rapidity?: number | undefined;
}
const speedsGiven = ({ speedC, speedKmS, rapidity }: Speeds): number =>
  [speedC, speedKmS, rapidity].filter((given) => given !== undefined).length;
const ONE_SPEED = 'one of "speedC", "speedKmS", "rapidity"';

const KINDS = '"barycentric", "velocity" or "toward-baseline"';

/**
 * How a frame moves in its parent, in the words and units in which it is stated: as the solar-system barycentre does, at a velocity in the
 * parent's axes, or from one site toward another.
 */
export const frameMotion = z.discriminatedUnion(
  'kind',
  [
    record({ kind: z.literal('barycentric') }),
    record({
      kind: z.literal('velocity'),
      /** In c; alone. */
      betaC: triple('a list of three numbers: the velocity in c', 'a number in c').optional(),
      ...speeds,
      toward: record({
        raDeg: numberThat('degrees from -360 to 360', (value) => Math.abs(value) <= 360),
        decDeg: numberThat('degrees from -90 to 90', (value) => Math.abs(value) <= 90),
      }).optional(),
    })
      .refine(({ betaC, ...given }) => (betaC === undefined ? 0 : 1) + speedsGiven(given) === 1, {
        error: 'one of "betaC", "speedC", "speedKmS", "rapidity"',
      })
      .refine(({ betaC, toward }) => (betaC === undefined) === (toward !== undefined), {
        error: '"betaC" alone, or a speed with "toward"',
      }),
    record({
      kind: z.literal('toward-baseline'),
      ...speeds,
      fromSiteId: idOf('a site of this network'),
      toSiteId: idOf('another site of this network'),
    })
      .refine((given) => speedsGiven(given) === 1, { error: ONE_SPEED })
      .refine(({ fromSiteId, toSiteId }) => fromSiteId !== toSiteId, {
        path: ['toSiteId'],
        error: 'the id of another site than fromSiteId',
      }),
  ],
  { error: ({ input }) => (typeof input === 'object' && input !== null ? KINDS : `an object { } with "kind" ${KINDS}`) },
);

export type FrameMotionStated = z.infer<typeof frameMotion>;

/** A motion in the words of network files, which is how the database keeps it; the sites of a baseline stand beside it. */
export function velocityStated(motion: FrameMotionStated): Omit<StatedVelocity, 'toward'> & Pick<Partial<StatedVelocity>, 'toward'> {
  if (motion.kind === 'barycentric') return {};
  const { speedC, speedKmS, rapidity } = motion;
  const speed = {
    ...(speedC !== undefined && { speed_c: speedC }),
    ...(speedKmS !== undefined && { speed_km_s: speedKmS }),
    ...(rapidity !== undefined && { rapidity }),
  };
  if (motion.kind === 'toward-baseline') return speed;
  const { betaC, toward } = motion;
  if (betaC) return { beta: betaC };
  return { ...speed, ...(toward && { toward: { ra_deg: toward.raDeg, dec_deg: toward.decDeg } }) };
}

/** What a frame moves like, as seen from the geocentric frame. */
export const frameResolved = z.strictObject({
  /** Whether it is the same at every instant. */
  isConstant: z.boolean(),
  /** Where it is not, it is as at this instant: the network's origin. */
  at: instant(),
  betaC: z.tuple([z.number(), z.number(), z.number()]),
  speedC: z.number(),
  /** 1 - speedC, exact where the speed is near 1. */
  shortOfLightC: z.number(),
  gamma: z.number(),
  rapidity: z.number(),
  /** Where it moves, ICRS; null at rest. */
  toward: z.strictObject({ raDeg: z.number(), decDeg: z.number() }).nullable(),
  /** How a chain that is not straight turns its axes. */
  wignerDeg: z.number(),
});

const frameState = z.strictObject({
  id: z.int(),
  number: z.int(),
  /** Null for the geocentric frame. */
  parentId: z.int().nullable(),
  at: z.enum(['event', 'origin']),
  /** Null for a kind that is not computed yet. */
  motion: frameMotion.nullable(),
  createdAt: utc(),
  createdBy: z.int().nullable(),
  supersededAt: utc().nullable(),
});

/** A frame of a network as it is in force. The geocentric one always exists, has no id, and is in no list. */
export const frame = z.strictObject({
  id: z.int(),
  networkId: z.int(),
  code: z.string(),
  name: z.string(),
  /** Place among the frames whose order stands in tables, 1 the first. */
  pinned: z.int().nullable(),
  version: z.int(),
  createdAt: utc(),
  closedAt: utc().nullable(),
  now: frameState,
  /** Null with a problem. */
  resolved: frameResolved.nullable(),
  problem: z.string().nullable(),
});

const frameWithHistory = frame.extend({ versions: z.array(frameState) });

const at = () => oneOf('event', 'origin');
const pinned = () => wholeNumber(1, MOST_PINNED).nullable();
const parentId = () => idOf('a frame of this network, or null for the geocentric one').nullable();

/** A frame's motion is stated anew as another version; `versions` are latest first. */
export const FRAME_ROUTES = {
  listFrames: route('GET', '/networks/:networkId/frames', {
    policy: 'frame:list',
    params: networkParams,
    query: record(pageQuery),
    answer: pageOf(frame),
  }),
  readFrame: route('GET', '/frames/:frameId', { policy: 'frame:read', params: frameParams, answer: frameWithHistory }),
  makeFrame: route('POST', '/networks/:networkId/frames', {
    policy: 'frame:make',
    params: networkParams,
    body: record({
      code: code().refine((given) => given !== 'geocentric', 'a code other than "geocentric", which always exists'),
      name: nameOrEmpty().optional(),
      pinned: pinned().optional(),
      parentId: parentId().optional(),
      at: at().optional(),
      motion: frameMotion,
    }),
    answer: frameWithHistory,
    makes: true,
  }),
  /** What is absent stays as it is. */
  changeFrame: route('PATCH', '/frames/:frameId', {
    policy: 'frame:change',
    params: frameParams,
    body: edit({
      name: nameOrEmpty().optional(),
      pinned: pinned().optional(),
      parentId: parentId().optional(),
      at: at().optional(),
      motion: frameMotion.optional(),
    }),
    answer: frameWithHistory,
  }),
  closeFrame: route('POST', '/frames/:frameId/close', {
    policy: 'frame:close',
    params: frameParams,
    body: versionSeen(),
    answer: frameWithHistory,
  }),
};

export type Frame = z.infer<typeof frame>;
export type FrameState = z.infer<typeof frameState>;
