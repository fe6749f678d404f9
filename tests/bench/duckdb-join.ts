import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { DuckDBInstance } from '@duckdb/node-api';
import { C_M_S } from '#shared/constants';
import { type QuietColumns } from './quiet-columns';

/** How the join went. */
export interface JoinResult {
  readonly version: string;
  readonly pairs: number;
  /** On one thread, as the finder works. */
  readonly oneThreadMs: number;
  /** On as many threads as the database chooses. */
  readonly allThreadsMs: number;
}

/**
 * The same question put to a database: pairs of different sites within light-time and three standard errors, by a range join over the times.
 *
 * The clocks of the quiet network are all different and share one reference, so a pair's variance is a sum of two columns.
 */
export async function duckdbRangeJoin({ events, errors }: QuietColumns, widestNs: number, sigmas: number): Promise<JoinResult> {
  const folder = mkdtempSync(join(tmpdir(), 'skewline-bench-'));
  try {
    const file = join(folder, 'events.csv');
    writeColumns(file, events, errors.referenceSigmaNs[0] ?? 0, errors.sitePositionSigmaM[0] ?? 0);
    const connection = await (await DuckDBInstance.create(':memory:')).connect();
    const version = String((await connection.runAndReadAll('select version()')).getRows()[0]?.[0]);
    await connection.run(
      `create table e as select * from read_csv('${file}', header = true, columns = {'t': 'BIGINT', 'site': 'SMALLINT', 'x': 'DOUBLE', 'y': 'DOUBLE', 'z': 'DOUBLE', 'v': 'DOUBLE'})`,
    );
    const widestPs = Math.ceil(widestNs * 1e3);
    const ask = async (): Promise<{ pairs: number; ms: number }> => {
      const started = performance.now();
      const rows = await connection.runAndReadAll(`
        select count(*) from e a join e b on b.t >= a.t and b.t <= a.t + ${widestPs}
        where a.site <> b.site and (b.t > a.t or (b.t = a.t and b.site > a.site))
          and (b.t - a.t) / 1e3 <= sqrt((b.x - a.x) * (b.x - a.x) + (b.y - a.y) * (b.y - a.y) + (b.z - a.z) * (b.z - a.z)) * ${1e9 / C_M_S}
            + ${sigmas} * sqrt(a.v + b.v)`);
      return { pairs: Number(rows.getRows()[0]?.[0]), ms: performance.now() - started };
    };
    const all = await ask();
    await connection.run('set threads = 1');
    const one = await ask();
    return { version, pairs: all.pairs, allThreadsMs: all.ms, oneThreadMs: one.ms };
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
