import { type LogScale } from './time-text';

/** A clock segment as the network file states it; the error of a rate that is not stated is 0. */
export interface SegmentEntry {
  readonly from: string;
  readonly at?: string;
  readonly offset_ns: number;
  readonly offset_sigma_ns: number;
  readonly rate_ns_per_day?: number;
  readonly rate_sigma_ns_per_day?: number;
  readonly covariance_ns2_per_day?: number;
  readonly reference: string;
}

export interface SiteEntry {
  readonly code: string;
  readonly name: string;
  readonly scale: LogScale;
  readonly clock: string;
  readonly position: { readonly geodetic: { readonly latitude_deg: number; readonly longitude_deg: number; readonly height_m: number } };
  readonly position_sigma_m: number;
  readonly delay_ns: number;
  readonly delay_sigma_ns: number;
  readonly reading_sigma_ns?: number;
}

const at = (latitude_deg: number, longitude_deg: number, height_m: number) => ({ geodetic: { latitude_deg, longitude_deg, height_m } });

export const CLOCKS: readonly { readonly code: string; readonly segments: readonly SegmentEntry[] }[] = [
  {
    code: 'pan-maser',
    segments: [
      {
        from: '2016-12-30T00:00:00Z',
        at: '2016-12-31T12:00:00 TAI',
        offset_ns: 642.7,
        offset_sigma_ns: 9,
        rate_ns_per_day: -28.4,
        rate_sigma_ns_per_day: 1.8,
        covariance_ns2_per_day: -6.5,
        reference: 'fountain',
      },
    ],
  },
  {
    code: 'shelf-rubidium',
    segments: [
      {
        from: '2016-12-31T12:00:00Z',
        at: '2016-12-31T18:00:00Z',
        offset_ns: -2210.5,
        offset_sigma_ns: 18,
        rate_ns_per_day: 311,
        rate_sigma_ns_per_day: 14,
        covariance_ns2_per_day: 120,
        reference: 'satellite',
      },
      {
        from: '2016-12-31T21:30:00Z',
        at: '2016-12-31T22:30:00Z',
        offset_ns: 1240,
        offset_sigma_ns: 22,
        rate_ns_per_day: 295,
        rate_sigma_ns_per_day: 40,
        covariance_ns2_per_day: -300,
        reference: 'satellite',
      },
      { from: '2017-01-01T02:10:00Z', offset_ns: 1502.5, offset_sigma_ns: 15, reference: 'satellite' },
    ],
  },
  {
    code: 'deep-quartz',
    segments: [
      {
        from: '2016-12-31T18:05:00Z',
        offset_ns: 48210.4,
        offset_sigma_ns: 85,
        rate_ns_per_day: -1912,
        rate_sigma_ns_per_day: 60,
        covariance_ns2_per_day: 2100,
        reference: 'satellite',
      },
    ],
  },
  {
    code: 'isle-caesium',
    segments: [
      {
        from: '2016-12-31T00:00:00 GPS',
        offset_ns: 77.1,
        offset_sigma_ns: 11,
        rate_ns_per_day: 3.2,
        rate_sigma_ns_per_day: 2.1,
        reference: 'fountain',
      },
      {
        from: '2016-12-31T23:59:60Z',
        offset_ns: -24.9,
        offset_sigma_ns: 13,
        rate_ns_per_day: 3.2,
        rate_sigma_ns_per_day: 2.1,
        reference: 'satellite',
      },
    ],
  },
];

export const REFERENCES = [
  { code: 'fountain', sigma_ns: 4 },
  { code: 'satellite', sigma_ns: 25 },
] as const;

/** A chain of flash detectors on rock, sand, ice and sea; none of them exists. */
export const SITES: readonly SiteEntry[] = [
  {
    code: 'KNF',
    name: 'Knap Fell',
    scale: 'TT',
    clock: 'exact',
    position: at(61.7, -9.9, 1180),
    position_sigma_m: 0.02,
    delay_ns: 88.25,
    delay_sigma_ns: 0.5,
    reading_sigma_ns: 12,
  },
  {
    code: 'CND',
    name: 'Cinder Pan',
    scale: 'GPS',
    clock: 'pan-maser',
    position: at(21.4, 7.9, 610),
    position_sigma_m: 0.05,
    delay_ns: 412.5,
    delay_sigma_ns: 1.5,
    reading_sigma_ns: 15,
  },
  {
    code: 'OXB',
    name: 'Oxbow Shaft',
    scale: 'TAI',
    clock: 'pan-maser',
    position: at(21.15, 8.2, -350),
    position_sigma_m: 0.3,
    delay_ns: 6120,
    delay_sigma_ns: 4,
    reading_sigma_ns: 20,
  },
  {
    code: 'FRZ',
    name: 'Frazil Shelf',
    scale: 'UTC',
    clock: 'shelf-rubidium',
    position: at(-71.3, 24.8, 45),
    position_sigma_m: 2,
    delay_ns: 230,
    delay_sigma_ns: 3,
    reading_sigma_ns: 25,
  },
  {
    code: 'BRW',
    name: 'Brackwater Deep',
    scale: 'UTC',
    clock: 'deep-quartz',
    position: at(27.4, -141.6, -3900),
    position_sigma_m: 8,
    delay_ns: 21450,
    delay_sigma_ns: 12,
  },
  {
    code: 'TDW',
    name: 'Tidewrack Isle',
    scale: 'GPS',
    clock: 'isle-caesium',
    position: at(-12.6, 88.2, 35),
    position_sigma_m: 0.1,
    delay_ns: 150.5,
    delay_sigma_ns: 1,
    reading_sigma_ns: 18,
  },
];

export interface Selection {
  readonly code: string;
  readonly events: readonly string[];
}

/** The text of network.json. */
export function networkText(selections: readonly Selection[]): string {
  const network = {
    network: 'Cairnway Chain',
    run: { name: 'turn of the year', from: '2016-12-31T18:00:00Z', to: '2017-01-01T06:00:00Z' },
    origin: { time: '2016-12-31T23:59:60Z' },
    references: REFERENCES,
    clocks: CLOCKS,
    sites: SITES,
    frames: [
      { code: 'bary', name: 'Solar-system barycentre', kind: 'barycentric' },
      {
        code: 'cmb',
        name: 'Cosmic background at rest',
        parent: 'bary',
        velocity: { speed_km_s: 369.82, toward: { ra_deg: 347.942, dec_deg: 6.944 } },
      },
      { code: 'stream', name: 'A fast stream through the background', parent: 'cmb', velocity: { beta: [0.1, 0, 0.02] } },
      { code: 'along', name: 'Along KNF to FRZ', velocity: { rapidity: 0.7, toward: { baseline: ['KNF', 'FRZ'] } } },
      {
        code: 'held',
        name: 'Along BRW to TDW as it lies at the origin',
        at: 'origin',
        velocity: { speed_c: 0.6, toward: { baseline: ['BRW', 'TDW'] } },
      },
    ],
    rule: { code: 'light2', minimum_fold: 2, sigmas: 3, window: { kind: 'light-time', speed_c: 1, margin_ns: 0 } },
    neighbours: { within_ns: 150_000_000 },
    selections,
  };
  return `${JSON.stringify(network, null, 2)}\n`;
}
