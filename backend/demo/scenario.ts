import { S_PER_DAY } from '#shared/constants';
import { type NetworkFile } from '#shared/contract/network-file';
import { createTaiWriter } from '#shared/time/format';

/** The code of the demo's network. */
export const NETWORK_CODE = 'marram';

/** What all of the stream is drawn from. */
export const SEED = 4_210;

/** Seconds of stream before the first start, so that the screens are not empty. */
export const HISTORY_S = 600;

const RUN_DAYS = 38; // for which the run has gone on

/** A coincidence rule in the words of the network file, with the sites that it is for; absent for all. */
export type DemoRule = NetworkFile['rule'] & { readonly name: string; readonly sites?: readonly string[] };

/** A source of reference pulses: pulse k leaves it at `firstTaiS + k periodS`, on TAI. */
export interface DemoEmitter {
  readonly code: string;
  readonly name: string;
  readonly geodetic: { readonly latitudeDeg: number; readonly longitudeDeg: number; readonly heightM: number };
  readonly positionSigmaM: number;
  readonly reference: string;
  readonly firstTaiS: number;
  readonly periodS: number;
  readonly toleranceNs: number;
}

/** Frames whose orders stand in the tables, from the first on. */
export const PINNED_FRAMES = ['bary', 'cmb', 'courier'] as const;

/** What the references, clocks and frames are called. */
export const NAMES: Readonly<Record<string, string>> = {
  fountain: 'Fountain clocks of the time keepers',
  satellite: 'Time from navigation satellites',
  'ossay-time': 'Time of Ossay Beacon',
  'tarrick-maser': 'Maser of Tarrick Weald',
  'lodge-quartz': 'Quartz of Tarrick Lodge',
  'basin-caesium': 'Caesium of Savva Basin, by fibre to Savva Head too',
  'pan-rubidium': 'Rubidium of Ombra Pan, which drifts',
  'terrace-receiver': 'Receiver of Ilcoma Terrace',
  'downs-rubidium': 'Rubidium of Gillora Downs',
  'kittsun-fountain': 'Fountain of Kittsun Lake',
};

const LIGHT_RULE: NetworkFile['rule'] = {
  code: 'light',
  minimum_fold: 2,
  sigmas: 3,
  window: { kind: 'light-time', speed_c: 1, margin_ns: 0 },
};

/** The rules of the network; the first is the network file's. */
export const RULES: readonly DemoRule[] = [
  { ...LIGHT_RULE, name: 'Within light-time' },
  {
    code: 'neighbours',
    name: 'Neighbours within a millisecond',
    minimum_fold: 2,
    sigmas: 3,
    window: { kind: 'fixed', width_ns: 1_000_000 },
    sites: ['TRK', 'TRL', 'SVB', 'SVH'],
  },
];

/**
 * The emitter of the network.
 *
 * @param firstTaiS the first second of the stream
 */
export const emitterOf = (firstTaiS: number): DemoEmitter => ({
  code: 'ossay',
  name: 'Ossay Beacon',
  geodetic: { latitudeDeg: 64.83, longitudeDeg: -18.64, heightM: 640 },
  positionSigmaM: 0.5,
  reference: 'ossay-time',
  firstTaiS: firstTaiS + 2,
  periodS: 20,
  toleranceNs: 20_000,
});

const at = (latitude_deg: number, longitude_deg: number, height_m: number) => ({ geodetic: { latitude_deg, longitude_deg, height_m } });

/**
 * The sites of the Marram Watch, which see fronts that cross the Earth at the speed of light and leave a flicker in a vat of cold brine.
 * None of them exists.
 */
const SITES: NetworkFile['sites'] = [
  {
    code: 'TRK',
    name: 'Tarrick Weald',
    scale: 'TAI',
    clock: 'tarrick-maser',
    position: at(57.21, -4.42, 460),
    position_sigma_m: 0.03,
    delay_ns: 118.4,
    delay_sigma_ns: 0.6,
    reading_sigma_ns: 10,
  },
  {
    code: 'TRL', // 400 m east of TRK, by a clock of its own
    name: 'Tarrick Lodge',
    scale: 'UTC',
    clock: 'lodge-quartz',
    position: at(57.21, -4.413381, 460),
    position_sigma_m: 0.1,
    delay_ns: 62,
    delay_sigma_ns: 2,
  },
  {
    code: 'SVB',
    name: 'Savva Basin',
    scale: 'GPS',
    clock: 'basin-caesium',
    position: at(47.93, 67.31, 380),
    position_sigma_m: 0.2,
    delay_ns: 240.5,
    delay_sigma_ns: 1.5,
    reading_sigma_ns: 14,
  },
  {
    code: 'SVH', // keeps time by the clock of SVB, at the other end of a fibre
    name: 'Savva Head',
    scale: 'TT',
    clock: 'basin-caesium',
    position: at(47.7, 67.55, 415),
    position_sigma_m: 0.2,
    delay_ns: 153_280,
    delay_sigma_ns: 9,
    reading_sigma_ns: 14,
  },
  {
    code: 'OMB',
    name: 'Ombra Pan',
    scale: 'UTC',
    clock: 'pan-rubidium',
    position: at(-22.41, 21.68, 1150),
    position_sigma_m: 1,
    delay_ns: 310,
    delay_sigma_ns: 3,
    reading_sigma_ns: 25,
  },
  {
    code: 'ILC',
    name: 'Ilcoma Terrace',
    scale: 'GPS',
    clock: 'terrace-receiver',
    position: at(-20.62, -67.88, 3740),
    position_sigma_m: 0.5,
    delay_ns: 95,
    delay_sigma_ns: 2,
  },
  {
    code: 'GIL',
    name: 'Gillora Downs',
    scale: 'UTC',
    clock: 'downs-rubidium',
    position: at(-25.13, 133.62, 515),
    position_sigma_m: 0.4,
    delay_ns: 187.25,
    delay_sigma_ns: 2.5,
    reading_sigma_ns: 22,
  },
  {
    code: 'KTS',
    name: 'Kittsun Lake',
    scale: 'TT',
    clock: 'kittsun-fountain',
    position: at(60.18, -110.37, 290),
    position_sigma_m: 0.05,
    delay_ns: 74.8,
    delay_sigma_ns: 0.4,
    reading_sigma_ns: 8,
  },
];

/** [days from the first second of the stream to its beginning, days to its epoch, offset, its error, rate, its error, covariance] */
type SegmentNumbers = readonly [number, number, number, number, number, number, number];

const CLOCKS: readonly { readonly code: string; readonly reference: string; readonly segments: readonly SegmentNumbers[] }[] = [
  { code: 'tarrick-maser', reference: 'fountain', segments: [[-RUN_DAYS, -10, 214.6, 6, 4.1, 0.3, -0.9]] },
  {
    code: 'lodge-quartz',
    reference: 'satellite',
    segments: [
      [-RUN_DAYS, -20, -3720, 60, 88, 9, 120],
      [-1.5, -0.5, -1842, 35, 96, 12, -150],
    ],
  },
  { code: 'basin-caesium', reference: 'satellite', segments: [[-RUN_DAYS, -7, 73.2, 9, -2.3, 0.8, 1.4]] },
  {
    code: 'pan-rubidium', // set back whenever it has gained too much; the last time within the stream's first minutes
    reference: 'satellite',
    segments: [
      [-RUN_DAYS, -RUN_DAYS, -12_400, 15, 1710, 12, 40],
      [-20, -20, -11_950, 14, 1765, 11, 35],
      [-6, -6, -5_320, 12, 1822, 14, -60],
      [-0.9, -0.9, -1_610, 12, 1868, 18, 55],
      [240 / S_PER_DAY, 240 / S_PER_DAY, -2_050, 11, 1874, 18, -45],
    ],
  },
  { code: 'terrace-receiver', reference: 'satellite', segments: [[-RUN_DAYS, -1, 35, 14, 0, 1.5, 0]] },
  {
    code: 'downs-rubidium',
    reference: 'satellite',
    segments: [
      [-RUN_DAYS, -15, 905, 16, 31, 2.5, 10],
      [-3, -1, -118, 12, 30.2, 4, -12],
    ],
  },
  { code: 'kittsun-fountain', reference: 'fountain', segments: [[-RUN_DAYS, -2, 1.2, 2.5, 0, 0.05, 0]] },
];

/**
 * The demo's network, as a network file of the batch command states it.
 *
 * @param firstTaiS the first second of the stream, about which the clock records lie
 * @returns network, run, references, clocks, sites, frames and first rule
 */
export function demoNetworkFile(firstTaiS: number): NetworkFile {
  const write = createTaiWriter(0);
  const time = (days: number): string => `${write({ taiS: firstTaiS + Math.round(days * S_PER_DAY), ps: 0 })} TAI`;
  return {
    network: 'Marram Watch',
    run: { name: 'First season', from: time(-RUN_DAYS) },
    origin: { time: time(0) },
    references: [
      { code: 'fountain', sigma_ns: 3 },
      { code: 'satellite', sigma_ns: 20 },
      { code: 'ossay-time', sigma_ns: 5 },
    ],
    clocks: CLOCKS.map(({ code, reference, segments }) => ({
      code,
      segments: segments.map(([from, epoch, offset, offsetSigma, rate, rateSigma, covariance]) => ({
        from: time(from),
        at: time(epoch),
        offset_ns: offset,
        offset_sigma_ns: offsetSigma,
        rate_ns_per_day: rate,
        rate_sigma_ns_per_day: rateSigma,
        covariance_ns2_per_day: covariance,
        reference,
      })),
    })),
    sites: SITES,
    frames: [
      { code: 'bary', name: 'Solar-system barycentre', kind: 'barycentric' },
      {
        code: 'cmb', // the Sun's motion against the background: Planck 2018 results I, table 3
        name: 'Cosmic background at rest',
        parent: 'bary',
        velocity: { speed_km_s: 369.82, toward: { ra_deg: 347.942, dec_deg: 6.944 } },
      },
      { code: 'courier', name: 'A courier from Tarrick to Ombra', velocity: { speed_c: 0.6, toward: { baseline: ['TRK', 'OMB'] } } },
      { code: 'return', name: 'The courier on its way back', velocity: { speed_c: 0.6, toward: { baseline: ['OMB', 'TRK'] } } },
      { code: 'drift', name: 'A drift through the background', parent: 'cmb', velocity: { beta: [0.1, -0.04, 0.02] } },
      {
        code: 'skiff',
        name: 'A skiff across the drift',
        parent: 'drift',
        velocity: { rapidity: 0.5, toward: { ra_deg: 62, dec_deg: -31 } },
      },
    ],
    rule: LIGHT_RULE,
  };
}
