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

/**
 * The same question put to a database: pairs of different sites within light-time and three standard errors, by a range join over the times.
 *
 * The clocks of the quiet network are all different and share one reference, so a pair's variance is a sum of two columns.
 */
export async function duckdbRangeJoin({ events, errors }: QuietColumns, widestNs: number, sigmas: number): Promise<JoinResults> {
  const folder = mkdtempSync(join(tmpdir(), 'skewline-bench-'));
  try {
    const file = join(folder, 'events.csv');
    writeColumns(file, events, errors.referenceSigmaNs[0] ?? 0, errors.sitePositionSigmaM[0] ?? 0);
    const connection = await (await DuckDBInstance.create(':memory:')).connect();
    const version = String((await connection.runAndReadAll('select version()')).getRows()[0]?.[0]);
    await connection.run('set threads = 1');
    await connection.run(
      `create table e as select t, t + ${events.taiS[0] ?? 0}::HUGEINT * 1000000000000 as tai, site, x, y, z, v from read_csv('${file}', header = true,
        columns = {'t': 'BIGINT', 'site': 'SMALLINT', 'x': 'DOUBLE', 'y': 'DOUBLE', 'z': 'DOUBLE', 'v': 'DOUBLE'})`,
    );
    const ask = async (time: string): Promise<JoinResult> => {
      const started = cpuMs();
      const rows = await connection.runAndReadAll(`
        select count(*) from e a join e b on b.${time} >= a.${time} and b.${time} <= a.${time} + ${Math.ceil(widestNs * 1e3)}
        where a.site <> b.site and (b.${time} > a.${time} or (b.${time} = a.${time} and b.site > a.site))
          and (b.${time} - a.${time}) / 1e3 <= ${sigmas} * sqrt(a.v + b.v) + ${1e9 / C_M_S} *
            sqrt((b.x - a.x) * (b.x - a.x) + (b.y - a.y) * (b.y - a.y) + (b.z - a.z) * (b.z - a.z))`);
      return { pairs: Number(rows.getRows()[0]?.[0]), cpuMs: cpuMs() - started };
    };
    return { version, absolute: await ask('tai'), sinceFirst: await ask('t') };
  } finally {
    rmSync(folder, { recursive: true });
  }
}

/** Times in picoseconds since the first second, places, and each event's own variance in ns^2 (less the shared reference). */
function writeColumns(file: string, events: QuietColumns['events'], referenceSigmaNs: number, positionSigmaM: number): void {
  const base = events.taiS[0] ?? 0;
  const positionNs = (positionSigmaM / C_M_S) * 1e9;
  let text = 't,site,x,y,z,v\n';
  const parts: string[] = [];
  for (let row = 0; row < events.count; row++) {
    const second = (events.taiS[row] ?? 0) - base;
    const sigmaNs = events.sigmaNs[row] ?? 0;
    const own = sigmaNs * sigmaNs - referenceSigmaNs * referenceSigmaNs + positionNs * positionNs;
    text += `${second}${String(events.ps[row] ?? 0).padStart(12, '0')},${events.site[row] ?? 0},${events.xM[row] ?? 0},${events.yM[row] ?? 0},${events.zM[row] ?? 0},${own}\n`;
    if (text.length < 1 << 20) continue;
    parts.push(text);
    text = '';
  }
  parts.push(text);
  writeFileSync(file, parts.join(''));
}
