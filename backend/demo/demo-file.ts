import { closeSync, existsSync, fsyncSync, openSync, readFileSync, renameSync, writeSync } from 'node:fs';
import { join } from 'node:path';
import * as z from 'zod';

const OWNER_ONLY_FILE = 0o600;

const demoSchema = z.strictObject({
  /** The database that it belongs to. */
  deploymentId: z.string(),
  /** The first second of the stream, TAI. */
  firstTaiS: z.int(),
  /** When the accounts were made: UTC with milliseconds. */
  madeAt: z.string(),
  people: z.array(z.strictObject({ role: z.string(), email: z.string(), password: z.string() })),
  /** The keys of the sites, by code. */
  keys: z.record(z.string(), z.string()),
});

/** What the database of a demo does not hold, since it keeps no secrets: passwords and keys, and when its stream began. */
export type DemoFile = z.infer<typeof demoSchema>;

const fileIn = (dataDir: string): string => join(dataDir, 'demo.json');

/** Whether a data folder holds a demo. */
export const hasDemoFile = (dataDir: string): boolean => existsSync(fileIn(dataDir));

/** What a data folder holds of its demo; undefined where it has none, or one that cannot be read. */
export function readDemoFile(dataDir: string): DemoFile | undefined {
  if (!hasDemoFile(dataDir)) return undefined;
  try {
    return demoSchema.safeParse(JSON.parse(readFileSync(fileIn(dataDir), 'utf8'))).data;
  } catch {
    return undefined;
  }
}

/** Keeps the file for its owner alone, whole or not at all, and on the disk before the database says that the demo is there. */
export function keepDemoFile(dataDir: string, demo: DemoFile): void {
  const file = fileIn(dataDir);
  const fd = openSync(`${file}.new`, 'w', OWNER_ONLY_FILE);
  try {
    writeSync(fd, `${JSON.stringify(demo, null, 2)}\n`);
    fsyncSync(fd);
  } finally {
    closeSync(fd);
  }
  renameSync(`${file}.new`, file);
}
