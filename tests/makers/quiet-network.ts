import { closeSync, openSync, writeSync } from 'node:fs';
import { join } from 'node:path';

/** What a quiet network is made of: sites spread over the globe, each with a clock of its own, triggers at random. */
export interface QuietNetwork {
  readonly sites: number;
  readonly triggers: number;
  /** Of all sites together. */
  readonly rateHz: number;
  readonly seed: number;
}

/** A small generator of numbers in [0, 1) (mulberry32, public domain): the same seed, the same network. */
export function seededRandom(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), state | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

/** The network's file: geodetic sites, drifting clocks against one reference, three frames, two-fold light-time coincidences. */
export function quietNetworkFile({ sites, seed }: QuietNetwork): object {
  const random = seededRandom(seed);
  const codes = Array.from({ length: sites }, (_, k) => `Q${String(k).padStart(2, '0')}`);
  return {
    network: 'Quiet network',
    run: { name: 'measurement', from: '2026-01-01T00:00:00Z' },
    references: [{ code: 'common-view', sigma_ns: 4 }],
    clocks: codes.map((code) => ({
      code: `${code}-clock`,
      segments: [
        {
          from: '2025-12-01T00:00:00Z',
          at: '2026-01-01T00:00:00Z',
          offset_ns: Math.round(1e4 * (random() - 0.5)),
          offset_sigma_ns: 12,
          rate_ns_per_day: Math.round(100 * (random() - 0.5)),
          rate_sigma_ns_per_day: 2,
          reference: 'common-view',
        },
      ],
    })),
    sites: codes.map((code) => ({
      code,
      scale: 'UTC',
      clock: `${code}-clock`,
      position: {
        geodetic: {
          latitude_deg: (Math.asin(2 * random() - 1) * 180) / Math.PI,
          longitude_deg: 360 * random() - 180,
          height_m: Math.round(3000 * random()),
        },
      },
      position_sigma_m: 0.05,
      delay_ns: 400,
      delay_sigma_ns: 1.5,
    })),
    frames: [
      { code: 'bary', kind: 'barycentric' },
      { code: 'cmb', parent: 'bary', velocity: { speed_km_s: 369.82, toward: { ra_deg: 347.942, dec_deg: 6.944 } } },
    ],
    rule: { code: 'light2', window: { kind: 'light-time' } },
  };
}

const TEXT_BYTES = 1 << 20;
const DAY_S = 86_400;

/** The reading of a number of nanoseconds after the start of 2026, in UTC: days from 1 January on, no leap second among them. */
function readingText(secondOfYear: number, nanosecond: number): string {
  const day = Math.floor(secondOfYear / DAY_S);
  const date = new Date(Date.UTC(2026, 0, 1 + day)).toISOString().slice(0, 10);
  const rest = secondOfYear - day * DAY_S;
  const two = (value: number): string => String(value).padStart(2, '0');
  const time = `${two(Math.floor(rest / 3600))}:${two(Math.floor(rest / 60) % 60)}:${two(rest % 60)}`;
  return `${date}T${time}.${String(nanosecond).padStart(9, '0')}`;
}

/** Writes one log a site into a folder and returns the paths; triggers are a Poisson process over all sites. */
export function writeQuietLogs(network: QuietNetwork, folder: string): readonly string[] {
  const random = seededRandom(network.seed + 1);
  const paths = Array.from({ length: network.sites }, (_, k) => join(folder, `Q${String(k).padStart(2, '0')}.csv`));
  const files = paths.map((path) => openSync(path, 'w'));
  const texts = paths.map(() => 'site,sequence,reading,sigma_ns,amplitude\n');
  const sequences = paths.map(() => 0);
  let atS = 0;
  for (let trigger = 0; trigger < network.triggers; trigger++) {
    atS -= Math.log(1 - random()) / network.rateHz;
    const site = Math.floor(random() * network.sites);
    const second = Math.floor(atS);
    const reading = readingText(second, Math.floor((atS - second) * 1e9));
    sequences[site] = (sequences[site] ?? 0) + 1;
    const code = `Q${String(site).padStart(2, '0')}`;
    texts[site] = `${texts[site] ?? ''}${code},${sequences[site] ?? 0},${reading},20,${(1 + 9 * random()).toFixed(2)}\n`;
    if ((texts[site] ?? '').length < TEXT_BYTES) continue;
    writeSync(files[site] ?? 0, texts[site] ?? '');
    texts[site] = '';
  }
  files.forEach((file, site) => {
    writeSync(file, texts[site] ?? '');
    closeSync(file);
  });
  return paths;
}
