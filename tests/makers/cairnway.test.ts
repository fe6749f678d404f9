import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { constantOrientation } from '#shared/earth/earth-orientation';
import { earthRotation } from '#shared/earth/rotation';
import { unitFromAngles } from '#shared/relativity/direction';
import { type Pair, pairOf } from '#shared/relativity/pair';
import { planeWaveDelayS } from '#shared/relativity/plane-wave';
import { apply, type Vec3 } from '#shared/relativity/vector';
import { type IntervalClass, verdictOf } from '#shared/relativity/verdict';
import { compareInstants, type Instant, instantOf, secondsBetween } from '#shared/time/instant';
import { shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { parseStatedTime } from '#shared/time/stated-time';
import { cairnwayFiles } from './cairnway/logs';
import { FLASHES } from './cairnway/story';
import { root } from '../../scripts/lib.mjs';
import { readExample } from '../support/example';

const folder = join(root, 'examples', 'cairnway');
const files = cairnwayFiles();

// WRITE=1 npx vitest run tests/makers/cairnway.test.ts makes the files anew.
beforeAll(() => {
  if (process.env['WRITE'] === undefined) return;
  for (const [path, text] of files) {
    mkdirSync(dirname(join(folder, path)), { recursive: true });
    writeFileSync(join(folder, path), text);
  }
});

describe('the files of examples/cairnway', () => {
  it.each([...files.keys()])('%s is what the maker makes', (path) => {
    expect(readFileSync(join(folder, path), 'utf8')).toBe(files.get(path));
  });
});

describe('examples/cairnway, reconciled', () => {
  const example = readExample('cairnway', [...['KNF', 'CND', 'FRZ', 'BRW', 'TDW'].map((code) => `logs/${code}.csv`), ['OXB', 'shaft.csv']]);
  const { network, events } = example;
  const { sigmas } = network.rule;

  const instantOfRow = (row: number): Instant => ({ taiS: events.taiS[row]!, ps: events.ps[row]! });
  const placeOfRow = (row: number): Vec3 => [events.xM[row]!, events.yM[row]!, events.zM[row]!];
  const triggersOf = (code: string): readonly number[] =>
    example.names.flatMap((name, row) => (name.startsWith(`${code}:`) && example.kinds[row] === 'trigger' ? [row] : []));

  /** All pairs of the events of a selection, the earlier one first. */
  function pairsOf(code: string): readonly Pair[] {
    const selection = network.selections.find((entry) => entry.code === code);
    const rows = selection!.events.map(example.row).toSorted((a, b) => a - b);
    return rows.flatMap((a, i) => rows.slice(i + 1).map((b) => pairOf(events, network.errors, a, b)));
  }
  const classesOf = (code: string): readonly IntervalClass[] => pairsOf(code).map((pair) => verdictOf(pair, sigmas).class);

  it('sets aside each line that is wrong, and nothing else', () => {
    const reasons = example.setAside.map(({ reason }) => reason).toSorted();
    expect(reasons).toEqual(
      [
        ...['amplitude', 'before-clock-record', 'columns', 'conflict', 'conflict', 'date', 'kind', 'no-leap-second', 'outside-run'],
        ...['reading-empty', 'reading-form', 'sequence', 'series', 'sigma', 'site', 'time-of-day'],
      ].toSorted(),
    );
    expect(example.repeated).toBe(6);
  });

  it('has events of every kind, and some in every segment of every clock', () => {
    expect(new Set(example.kinds)).toEqual(new Set(['trigger', 'reference', 'test']));
    // Seven segments of four clocks, and the exact one.
    expect(new Set(events.segment)).toEqual(new Set([-1, 0, 1, 2, 3, 4, 5, 6]));
  });

  it.each(FLASHES.map((flash) => flash.scene))(
    'brings the fronts back to one plane each, across scales, clocks and leap second: %s',
    (scene) => {
      const flash = FLASHES.find((entry) => entry.scene === scene)!;
      // TAI - UTC was 36 s on 2016-12-31.
      const dayTaiS = Date.UTC(2016, 11, 31) / 1000 + 36;
      const instant = instantOf(dayTaiS + Number(flash.passes / 10n ** 12n), Number(flash.passes % 10n ** 12n));
      const rotation = earthRotation(constantOrientation(-36));
      const fromEarthFixed = unitFromAngles({ longitudeDeg: flash.fromLongitudeDeg, latitudeDeg: flash.fromLatitudeDeg });
      const from = apply(rotation.rotationAt(instant), fromEarthFixed);
      for (const code of flash.sites) {
        const misses = triggersOf(code).map((row) => {
          const expectedS = planeWaveDelayS(from, placeOfRow(row)) / flash.speedC;
          const missNs = (secondsBetween(instant, instantOfRow(row)) - expectedS) * 1e9;
          return Math.abs(missNs) / events.sigmaNs[row]!;
        });
        expect(Math.min(...misses), code).toBeLessThan(4);
      }
    },
  );

  it('has one trigger outside live time, while the clock of the shelf was restarted', () => {
    const [, ...spans] = files.get('live.csv')!.trimEnd().split('\n');
    const live = spans.map((line) => {
      const [code = '', ...ends] = line.split(',');
      const [from, to] = ends.map((text) => {
        const time = parseStatedTime(text, 'live.csv', shippedLeapSeconds());
        if (!time.ok) throw new Error(time.problem.text);
        return time.value.instant;
      });
      return { code, from: from!, to: to! };
    });
    const outside = network.sites.flatMap(({ code }) =>
      triggersOf(code).filter((row) => {
        const instant = instantOfRow(row);
        const holds = live.filter(({ from, to }) => compareInstants(from, instant) <= 0 && compareInstants(instant, to) <= 0);
        return !holds.some((span) => span.code === code);
      }),
    );
    expect(outside.map((row) => example.names[row]!.split(':')[0])).toEqual(['FRZ']);
  });

  it('holds what its README says of the selections', () => {
    expect(classesOf('leap-flash')).toEqual(new Array(15).fill('spacelike'));
    expect(classesOf('slow-front').filter((kind) => kind === 'timelike')).toHaveLength(8);
    expect(classesOf('relay')).toEqual(['timelike']);
    expect(classesOf('edge')).toEqual(['undecided']);
  });
});
