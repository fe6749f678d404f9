import { SITES, type SiteEntry } from './network';
import { type Random } from './random';
import { elapsed, type ElapsedPs } from './time-text';
import { arrival, lightTimePs, type Wave } from './wave';

/** What a detector saw, at its true time; `scene` says which of the injected happenings it belongs to. */
export interface Happening {
  readonly site: string;
  readonly at: ElapsedPs;
  readonly kind: 'trigger' | 'reference' | 'test';
  readonly amplitude: number;
  readonly scene?: string;
}

const PS_PER_MS = 10 ** 9;

/** Spans in which each site could trigger. */
export const LIVE: readonly { readonly site: string; readonly from: string; readonly to: string }[] = [
  { site: 'KNF', from: '2016-12-31T18:00:00Z', to: '2017-01-01T06:00:00Z' },
  { site: 'CND', from: '2016-12-31T18:00:00Z', to: '2017-01-01T06:00:00Z' },
  { site: 'OXB', from: '2016-12-31T18:00:36 TAI', to: '2017-01-01T06:00:37 TAI' },
  { site: 'FRZ', from: '2016-12-31T18:00:00Z', to: '2016-12-31T21:22:00Z' },
  { site: 'FRZ', from: '2016-12-31T21:41:00Z', to: '2017-01-01T06:00:00Z' },
  { site: 'BRW', from: '2016-12-31T18:05:00Z', to: '2017-01-01T06:00:00Z' },
  { site: 'TDW', from: '2016-12-31T18:00:17 GPS', to: '2017-01-01T00:00:18 GPS' },
  { site: 'TDW', from: '2017-01-01T00:00:00Z', to: '2017-01-01T06:00:00Z' },
];

/** Each site's happenings by chance begin here, well inside its live spans. */
const QUIET_FROM = elapsed('18:06:00');
const QUIET_TO = elapsed('05:59:00', 1);
const RESTART = { from: elapsed('21:22:00'), to: elapsed('21:41:00') };
const CHANCE_TRIGGERS = 240;

interface Flash extends Wave {
  readonly scene: string;
  readonly sites: readonly string[];
}

/** Fronts that cross the chain: three at c, of which the first comes in the leap second, and one at about a third of it. */
export const FLASHES: readonly Flash[] = [
  {
    scene: 'leap-flash',
    passes: elapsed('23:59:60.4'),
    fromLongitudeDeg: 31,
    fromLatitudeDeg: 18,
    speedC: 1,
    sites: ['KNF', 'CND', 'OXB', 'FRZ', 'BRW', 'TDW'],
  },
  {
    scene: 'evening-flash',
    passes: elapsed('20:14:07.2512'),
    fromLongitudeDeg: -63,
    fromLatitudeDeg: -41,
    speedC: 1,
    sites: ['KNF', 'CND', 'FRZ', 'BRW'],
  },
  {
    scene: 'morning-flash',
    passes: elapsed('04:40:31.8', 1),
    fromLongitudeDeg: 120,
    fromLatitudeDeg: 66,
    speedC: 1,
    sites: ['OXB', 'BRW', 'TDW'],
  },
  {
    scene: 'slow-front',
    passes: elapsed('03:05:12.07', 1),
    fromLongitudeDeg: 12,
    fromLatitudeDeg: 74,
    speedC: 0.35,
    sites: ['KNF', 'CND', 'FRZ', 'BRW', 'TDW'],
  },
];

const siteOf = (code: string): SiteEntry => {
  const site = SITES.find((entry) => entry.code === code);
  if (!site) throw new Error(`no site ${code}`);
  return site;
};

function chanceTriggers(site: string, random: Random): readonly Happening[] {
  const found: Happening[] = [];
  while (found.length < CHANCE_TRIGGERS) {
    const at = QUIET_FROM + BigInt(Math.floor(random.even() * Number(QUIET_TO - QUIET_FROM)));
    if (site === 'FRZ' && at > RESTART.from && at < RESTART.to) continue;
    found.push({ site, at, kind: 'trigger', amplitude: 3 - 4 * Math.log(1 - random.even()) });
  }
  return found;
}

/** Every half hour a pulse of known origin, at the sites that have one; every three hours a test everywhere. */
function pulses(): readonly Happening[] {
  const list: Happening[] = [];
  for (let k = 1; k < 24; k++) {
    const at = elapsed('18:00:00') + BigInt(k) * 1_800n * 10n ** 12n;
    for (const site of ['KNF', 'CND', 'FRZ']) list.push({ site, at, kind: 'reference', amplitude: 50 });
    if (k % 6 === 0) for (const { code } of SITES) list.push({ site: code, at: at + 7n * 10n ** 12n, kind: 'test', amplitude: 99 });
  }
  return list.filter(({ site, at }) => site !== 'FRZ' || at < RESTART.from || at > RESTART.to);
}

function flashTriggers(flash: Flash, random: Random): readonly Happening[] {
  return flash.sites.flatMap((code) => {
    const at = arrival(flash, siteOf(code));
    const seen: Happening = { site: code, at, kind: 'trigger', amplitude: random.between(20, 80), scene: flash.scene };
    // The detector rings: a weaker trigger some milliseconds later, which anyone sees later.
    const ringing = at + BigInt(Math.floor(random.between(2, 9) * PS_PER_MS));
    return random.even() < 0.5 ? [seen] : [seen, { site: code, at: ringing, kind: 'trigger', amplitude: random.between(3, 8) }];
  });
}

/** Two pairs by design: one that a signal below c joins, one that lies closer to the light cone than the clocks can tell. */
function closePairs(): readonly Happening[] {
  const relay = elapsed('22:41:19.5');
  const edge = elapsed('01:17:44.25', 1);
  const trigger = (site: string, at: ElapsedPs, scene: string): Happening => ({ site, at, kind: 'trigger', amplitude: 30, scene });
  return [
    trigger('CND', relay, 'relay'),
    trigger('OXB', relay + lightTimePs(siteOf('CND'), siteOf('OXB')) + 23_400_000n, 'relay'),
    trigger('CND', edge, 'edge'),
    trigger('BRW', edge + lightTimePs(siteOf('CND'), siteOf('BRW')) + 40_000n, 'edge'),
  ];
}

/** All that happened, in no particular order. */
export function happenings(random: Random): readonly Happening[] {
  return [
    ...SITES.flatMap(({ code }) => chanceTriggers(code, random)),
    ...pulses(),
    ...FLASHES.flatMap((flash) => flashTriggers(flash, random)),
    ...closePairs(),
    // While the shelf's clock was restarted its detector was not live; this one is kept and counted.
    { site: 'FRZ', at: elapsed('21:25:11.5'), kind: 'trigger', amplitude: 4 },
  ];
}
