import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { DuckDBInstance } from '@duckdb/node-api';
import { C_M_S } from '#shared/constants';
import { cpuMs } from './medians';
import { type QuietColumns } from './quiet-columns';

/** How a join went, on one thread as the finder works. */
export interface JoinResult {
  readonly pairs: number;
  readonly cpuMs: number;
}

/** The join over times as the events have them, and over times that a user has first made small. */
export interface JoinResults {
  readonly version: string;
  /** TAI in picoseconds, which takes 128 bits. */
  readonly absolute: JoinResult;
  /** Picoseconds since the first event, which take 64. */
  readonly sinceFirst: JoinResult;
}

/** Variance of a clock at an event's epoch, and of a pair's gap: the rule as the finder has it, terms that both share left out. */
const CLOCK = (e: string): string => `(${e}.offset2 + 2 * ${e}.covariance * ${e}.days + ${e}.rate2 * ${e}.days * ${e}.days)`;
const GAP = `(a.reading2 + b.reading2 + a.position2 + b.position2 + case when a.site = b.site then 0 else a.delay2 + b.delay2 end
  + case when a.segment = b.segment then a.rate2 * (b.days - a.days) * (b.days - a.days)
    else ${CLOCK('a')} + ${CLOCK('b')} + case when a.reference = b.reference then 0 else a.reference2 + b.reference2 end end)`;

const COLUMNS = {
  t: 'BIGINT',
  site: 'SMALLINT',
  segment: 'INTEGER',
  x: 'DOUBLE',
  y: 'DOUBLE',
  z: 'DOUBLE',
  days: 'DOUBLE',
  reading2: 'DOUBLE',
  delay2: 'DOUBLE',
  position2: 'DOUBLE',
  offset2: 'DOUBLE',
  covariance: 'DOUBLE',
  rate2: 'DOUBLE',
  reference: 'INTEGER',
  reference2: 'DOUBLE',
};

/**
 * The same question put to a database: the pairs of different sites within light-time and the standard errors of their gap, by a range join over
 * the times, kept as rows.
 */
export async function duckdbRangeJoin(columns: QuietColumns, widestNs: number, sigmas: number): Promise<JoinResults> {
  const folder = mkdtempSync(join(tmpdir(), 'skewline-bench-'));
  try {
    const file = join(folder, 'events.csv');
    writeColumns(file, columns);
    const connection = await (await DuckDBInstance.create(':memory:')).connect();
    const version = String((await connection.runAndReadAll('select version()')).getRows()[0]?.[0]);
    await connection.run('set threads = 1');
    const types = Object.entries(COLUMNS).map(([name, type]) => `'${name}': '${type}'`);
    await connection.run(
      `create table e as select row_number() over () as id, t + ${columns.events.taiS[0] ?? 0}::HUGEINT * 1000000000000 as tai, *
        from read_csv('${file}', header = true, columns = {${types.join(', ')}})`,
    );
    const ask = async (time: string): Promise<JoinResult> => {
      const started = cpuMs();
      await connection.run(`
        create or replace table near as select a.id as a, b.id as b
        from e a join e b on b.${time} >= a.${time} and b.${time} <= a.${time} + ${Math.ceil(widestNs * 1e3)}
        where a.site <> b.site and (b.${time} > a.${time} or (b.${time} = a.${time} and b.site > a.site))
          and (b.${time} - a.${time}) / 1e3 <= ${sigmas} * sqrt(${GAP}) + ${1e9 / C_M_S} *
            sqrt((b.x - a.x) * (b.x - a.x) + (b.y - a.y) * (b.y - a.y) + (b.z - a.z) * (b.z - a.z))`);
      const tookMs = cpuMs() - started;
      const rows = await connection.runAndReadAll('select count(*) from near');
      return { pairs: Number(rows.getRows()[0]?.[0]), cpuMs: tookMs };
    };
    return { version, absolute: await ask('tai'), sinceFirst: await ask('t') };
  } finally {
    rmSync(folder, { recursive: true });
  }
}

/** The finder's columns as a table: times in picoseconds since the first second, places, and what the errors are made of. */
function writeColumns(file: string, { events: e, errors }: QuietColumns): void {
  const base = e.taiS[0] ?? 0;
  const square = (x: number): number => x * x;
  const parts = [`${Object.keys(COLUMNS).join(',')}\n`];
  for (let row = 0; row < e.count; row++) {
    const site = e.site[row] ?? 0;
    const segment = e.segment[row] ?? 0;
    const reference = errors.segmentReference[segment] ?? 0;
    const time = `${(e.taiS[row] ?? 0) - base}${String(e.ps[row] ?? 0).padStart(12, '0')}`;
    const place = `${e.xM[row] ?? 0},${e.yM[row] ?? 0},${e.zM[row] ?? 0}`;
    const own = `${square(e.readingSigmaNs[row] ?? 0)},${square(errors.siteDelaySigmaNs[site] ?? 0)},${square(((errors.sitePositionSigmaM[site] ?? 0) / C_M_S) * 1e9)}`;
    const clock = `${square(errors.segmentOffsetSigmaNs[segment] ?? 0)},${errors.segmentCovarianceNs2PerDay[segment] ?? 0},${square(errors.segmentRateSigmaNsPerDay[segment] ?? 0)}`;
    parts.push(
      `${time},${site},${segment},${place},${e.sinceEpochDays[row] ?? 0},${own},${clock},${reference},${square(errors.referenceSigmaNs[reference] ?? 0)}\n`,
    );
  }
  writeFileSync(file, parts.join(''));
}
