import { networkText, type Selection, SITES, type SiteEntry } from './network';
import { type Random, randomFrom } from './random';
import { type Happening, happenings, LIVE } from './story';
import { elapsed, type ElapsedPs, textOn } from './time-text';
import { type TrueClock, trueClocks } from './true-clock';

const SEED = 20161231;

/** How a site writes its log. */
interface LogStyle {
  readonly file: string;
  readonly decimals: number;
  readonly columns: readonly string[];
  readonly lineEnd: '\n' | '\r\n';
  readonly sequenceDigits: number;
  readonly firstSequence: number;
  /** From this time on the numbering starts anew, under the series `b`. */
  readonly anewFrom?: ElapsedPs;
  /** Standard errors are written line by line, within this range. */
  readonly sigmaNs?: readonly [number, number];
}

const PLAIN = { lineEnd: '\n', sequenceDigits: 1, firstSequence: 1 } as const;
const STYLES: Readonly<Record<string, LogStyle>> = {
  KNF: {
    ...PLAIN,
    file: 'logs/KNF.csv',
    decimals: 12,
    columns: ['site', 'sequence', 'reading', 'sigma_ns', 'amplitude', 'kind', 'remark'],
  },
  CND: {
    ...PLAIN,
    file: 'logs/CND.csv',
    decimals: 11,
    columns: ['site', 'sequence', 'reading', 'sigma_ns', 'amplitude', 'kind'],
    sigmaNs: [8, 30],
  },
  OXB: {
    ...PLAIN,
    file: 'shaft.csv',
    decimals: 10,
    columns: ['sequence', 'reading', 'sigma_ns', 'amplitude', 'kind'],
    sequenceDigits: 5,
    firstSequence: 870,
  },
  FRZ: {
    ...PLAIN,
    file: 'logs/FRZ.csv',
    decimals: 9,
    columns: ['sequence', 'series', 'site', 'reading', 'sigma_ns', 'amplitude', 'kind', 'ice_temperature_c'],
    lineEnd: '\r\n',
    firstSequence: 41_200,
    anewFrom: elapsed('21:30:00'),
  },
  BRW: { ...PLAIN, file: 'logs/BRW.csv', decimals: 7, columns: ['site', 'sequence', 'reading', 'sigma_ns', 'amplitude', 'kind'] },
  TDW: {
    ...PLAIN,
    file: 'logs/TDW.csv',
    decimals: 10,
    columns: ['reading', 'sequence', 'site', 'sigma_ns', 'amplitude', 'kind'],
    sigmaNs: [10, 26],
  },
};

/** Lines that are wrong, by site: cells that differ from those of a good line, or the whole line. */
type Cells = Readonly<Record<string, string>>;
const WRONG: Readonly<Record<string, readonly (Cells | string)[]>> = {
  KNF: [
    { sequence: '9001', reading: '2017-02-30T01:00:00.000000000000' },
    { sequence: '9002', amplitude: 'loud' },
    { sequence: '9003', site: 'KNX' },
  ],
  CND: [{ sequence: '9001', reading: '31.12.2016 23:15:00' }, { sequence: '-3' }],
  OXB: [{ sequence: '9001', reading: '2016-12-31T24:00:00.0000000000' }],
  FRZ: [
    { sequence: '9001', reading: '2016-12-31T22:59:60.100000000' },
    { sequence: '9002', series: 'series b' },
  ],
  BRW: [
    { sequence: '9001', reading: '2016-12-31T18:02:30.0000000' },
    { sequence: '9002', sigma_ns: '-5' },
    { sequence: '9003', kind: 'noise' },
  ],
  TDW: [{ sequence: '9001', reading: '' }, { sequence: '9002', reading: '2017-01-01T07:00:00.0000000000' }, '2017-01-01T02:00:00,9003,TDW'],
};

/** The name of a happening in the results. */
interface Named {
  readonly name: string;
  readonly happening: Happening;
}

interface SiteLog {
  readonly file: string;
  readonly text: string;
  readonly named: readonly Named[];
}

/** All files of the example but its README, by their path in the folder. */
export function cairnwayFiles(): ReadonlyMap<string, string> {
  const random = randomFrom(SEED);
  const clockOf = trueClocks(random);
  const all = happenings(random);
  const logs = SITES.map((site) =>
    writeLog(
      site,
      all.filter((happening) => happening.site === site.code),
      clockOf(site),
      random,
    ),
  );
  return new Map([
    ['network.json', networkText(selectionsFrom(logs.flatMap(({ named }) => named)))],
    ['live.csv', ['site,from,to', ...LIVE.map(({ site, from, to }) => `${site},${from},${to}`), ''].join('\n')],
    ...logs.map(({ file, text }) => [file, text] as const),
  ]);
}

function selectionsFrom(named: readonly Named[]): readonly Selection[] {
  return ['leap-flash', 'slow-front', 'relay', 'edge'].map((code) => ({
    code,
    events: named.filter(({ happening }) => happening.scene === code).map(({ name }) => name),
  }));
}

function writeLog(site: SiteEntry, seen: readonly Happening[], clock: TrueClock, random: Random): SiteLog {
  const style = STYLES[site.code];
  if (!style) throw new Error(`no style for ${site.code}`);
  const sorted = seen.toSorted((a, b) => (a.at < b.at ? -1 : 1));
  const delayNs = site.delay_ns + site.delay_sigma_ns * random.normal();
  const shownPs = (happening: Happening): number => clock(happening.at) + delayNs * 1000;
  let next = style.firstSequence;
  let series = '';
  const lines: { cells: Cells; happening: Happening }[] = sorted.map((happening) => {
    if (series === '' && style.anewFrom !== undefined && happening.at >= style.anewFrom) [next, series] = [1, 'b'];
    const sequence = String(next++).padStart(style.sequenceDigits, '0');
    return { cells: { ...cellsOf(site, style, happening, shownPs(happening), random), sequence, series }, happening };
  });
  // Logs are written as their machines please: now and then two lines change places.
  for (let i = 1; i < lines.length; i += 17) [lines[i - 1], lines[i]] = [lines[i]!, lines[i - 1]!];
  const texts = lines.map(({ cells }) => lineOf(style, cells));
  const again = site.code === 'KNF' ? texts.slice(100, 106) : [];
  const changed = site.code === 'CND' ? [lineOf(style, { ...lines[40]!.cells, amplitude: '1.5' })] : [];
  const good = lines[12]!.cells;
  const wrong = (WRONG[site.code] ?? []).map((cells) => (typeof cells === 'string' ? cells : lineOf(style, { ...good, ...cells })));
  for (const line of [...again, ...changed, ...wrong]) texts.splice(60 + Math.floor(random.even() * (texts.length - 60)), 0, line);
  return {
    file: style.file,
    text: [style.columns.join(','), ...texts, ''].join(style.lineEnd),
    named: lines.map(({ cells, happening }) => ({
      name: [site.code, ...(cells['series'] === '' ? [] : [cells['series']]), String(Number(cells['sequence']))].join(':'),
      happening,
    })),
  };
}

/** Reads the clock, which shows so much more than the true time of the happening, with the error of a reading. */
function cellsOf(site: SiteEntry, style: LogStyle, { at, kind, amplitude }: Happening, shownPs: number, random: Random): Cells {
  const statedNs = style.sigmaNs ? Math.round(random.between(...style.sigmaNs) * 10) / 10 : undefined;
  const noisePs = random.normal() * (statedNs ?? site.reading_sigma_ns ?? 0) * 1000;
  const ice = -18 - 3 * random.even();
  return {
    site: site.code,
    reading: textOn(site.scale, at + BigInt(Math.round(shownPs + noisePs)), style.decimals),
    sigma_ns: statedNs === undefined ? '' : String(statedNs),
    amplitude: amplitude.toFixed(2),
    kind: kind === 'trigger' ? '' : kind,
    remark: kind === 'test' ? '"by hand, from the hut"' : '',
    ice_temperature_c: ice.toFixed(1),
  };
}

const lineOf = (style: LogStyle, cells: Cells): string => style.columns.map((column) => cells[column] ?? '').join(',');
