import { spawnSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { quietNetworkFile, writeQuietLogs } from '../makers/quiet-network';
import { median, ratioText } from './medians';

const TRIGGERS = Number(process.env['TRIGGERS'] ?? 1_000_000);
const ROUNDS = 3;
const QUIET = { sites: 10, triggers: TRIGGERS, rateHz: 10, seed: 7 };

/** What a finished process took. */
interface Usage {
  readonly cpuS: number;
  readonly peakMB: number;
}

const here = import.meta.dirname;
const folder = mkdtempSync(join(tmpdir(), 'skewline-bench-'));

/** Runs a Node program and reads what it took from its own account at its end. */
function measure(args: readonly string[]): Usage {
  const usageFile = join(folder, 'usage.json');
  const { status, stderr } = spawnSync(process.execPath, ['--import', join(here, 'report-usage.bench.js'), ...args], {
    env: { ...process.env, USAGE_FILE: usageFile },
    encoding: 'utf8',
    maxBuffer: 1 << 26,
  });
  if (status !== 0) throw new Error(stderr);
  const usage = JSON.parse(readFileSync(usageFile, 'utf8')) as { userCPUTime: number; systemCPUTime: number; maxRSS: number };
  return { cpuS: (usage.userCPUTime + usage.systemCPUTime) / 1e6, peakMB: usage.maxRSS / 1024 };
}

try {
  const logFolder = join(folder, 'logs');
  mkdirSync(logFolder);
  const network = join(folder, 'network.json');
  writeFileSync(network, JSON.stringify(quietNetworkFile(QUIET)));
  const logs = writeQuietLogs(QUIET, logFolder);
  const command = ['../backend/skewline.js', 'reconcile', '--network', network, '--out', join(folder, 'out'), ...logs];
  const runs: { ours: Usage[]; lists: Usage[]; objects: Usage[] } = { ours: [], lists: [], objects: [] };
  for (let round = 0; round < ROUNDS; round++) {
    runs.ours.push(measure([join(here, command[0] ?? ''), ...command.slice(1)]));
    runs.lists.push(measure([join(here, 'papaparse-alone.bench.js'), 'lists', ...logs]));
    runs.objects.push(measure([join(here, 'papaparse-alone.bench.js'), 'objects', ...logs]));
  }
  const cpu = (usages: readonly Usage[]): readonly number[] => usages.map(({ cpuS }) => cpuS);
  console.log(`command: reconcile, ${TRIGGERS} triggers, all result files, CPU of the whole process`);
  console.log(`  reconcile / papaparse alone, step, rows as objects   ${ratioText(cpu(runs.ours), cpu(runs.objects))}   at most 10`);
  console.log(`  reconcile / papaparse alone, step, rows as lists     ${ratioText(cpu(runs.ours), cpu(runs.lists))}`);
  console.log(
    `  (${((median(cpu(runs.ours)) / TRIGGERS) * 1e6).toFixed(2)} us an event; peak memory ${Math.max(...runs.ours.map(({ peakMB }) => peakMB)).toFixed(0)} MB)`,
  );
} finally {
  rmSync(folder, { recursive: true, force: true });
}
