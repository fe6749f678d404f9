import { appendFileSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect } from 'vitest';
import { quietNetworkFile, writeQuietLogs } from '../makers/quiet-network';
import { SKEWLINE, startProgram } from './command';
import { newFolder } from './folder';

/** Says the most memory that a process had, kB, as its last word (getrusage(2), ru_maxrss). */
const TELL_PEAK = 'data:text/javascript,process.on("exit",()=>process.stderr.write(`peak ${process.resourceUsage().maxRSS}\\n`))';

/** One line in so many is said again, and one in twice as many is at fault. */
const AGAIN_EVERY = 1_000;

/** What a run over many triggers came to. */
export interface ManyEvents {
  readonly folder: string;
  readonly lines: number;
  readonly repeated: number;
  readonly atFault: number;
  readonly summary: Readonly<Record<string, unknown>>;
  readonly peakBytes: number;
  readonly tookS: number;
}

/** Writes the logs of a quiet network of ten sites, with lines said again and lines at fault, runs the command over them and looks at its memory. */
export async function reconcileMany(triggers: number): Promise<ManyEvents> {
  const folder = newFolder('many');
  const quiet = { sites: 10, triggers, rateHz: 10, seed: 3 };
  writeFileSync(join(folder, 'network.json'), JSON.stringify(quietNetworkFile(quiet)));
  const logs = writeQuietLogs(quiet, folder);
  let repeated = 0;
  let atFault = 0;
  for (const log of logs) {
    const more: string[] = [];
    for (const [at, line] of readFileSync(log, 'utf8').split('\n').entries()) {
      if (at === 0 || line === '' || at % AGAIN_EVERY !== 0) continue;
      more.push(line);
      repeated++;
      if (at % (2 * AGAIN_EVERY) !== 0) continue;
      more.push(line.replace('T', 't'));
      atFault++;
    }
    appendFileSync(log, more.map((line) => `${line}\n`).join(''));
  }
  const [node = '', script = ''] = SKEWLINE;
  const args = ['reconcile', '--network', join(folder, 'network.json'), '--out', join(folder, 'out'), ...logs];
  const startMs = performance.now();
  const { code, stderr } = await startProgram([node, '--import', TELL_PEAK, script, ...args]).ended;
  const tookS = (performance.now() - startMs) / 1000;
  expect(stderr).toMatch(/\npeak \d+\n$/);
  expect(code).toBe(0);
  return {
    folder,
    lines: triggers + repeated + atFault,
    repeated,
    atFault,
    summary: JSON.parse(readFileSync(join(folder, 'out', 'summary.json'), 'utf8')) as Record<string, unknown>,
    peakBytes: 1024 * Number(/peak (\d+)/.exec(stderr)![1]),
    tookS,
  };
}

/** Holds the counts of a run to what its logs were made of. */
export function checkCounts({ lines, repeated, atFault, summary }: ManyEvents, triggers: number): void {
  expect(summary).toMatchObject({ lines, repeated, events: { trigger: triggers, reference: 0, test: 0 }, crowded: 0 });
  expect(summary['set_aside']).toEqual({ total: atFault, 'reading-form': atFault });
}
