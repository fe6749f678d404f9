import { existsSync, readdirSync, readFileSync, statSync } from 'node:fs';
import { join } from 'node:path';
import { createHash } from 'node:crypto';

/** Every file and folder below a folder, hidden ones too, each file with the hash of its bytes. */
export function contentOf(folder: string): Readonly<Record<string, string>> {
  const names = readdirSync(folder, { recursive: true, encoding: 'utf8' }).sort();
  return Object.fromEntries(
    names.map((name) => {
      const path = join(folder, name);
      return [name, statSync(path).isDirectory() ? 'folder' : createHash('sha256').update(readFileSync(path)).digest('hex')];
    }),
  );
}

const LOOK_MS = 5;

/** Waits until something holds, and fails after a while. */
export async function until(what: string, holds: () => boolean, limitMs = 20_000): Promise<void> {
  const startMs = performance.now();
  while (!holds()) {
    if (performance.now() - startMs > limitMs) throw new Error(`no ${what} in ${limitMs} ms`);
    await new Promise((resolve) => setTimeout(resolve, LOOK_MS));
  }
}

/** Whether an unfinished result of the given name is being written in a folder, beside the results or inside them. */
export function isBeingWritten(folder: string, file = ''): boolean {
  const stages = readdirSync(folder, { recursive: true, encoding: 'utf8' }).filter((name) => /unfinished-[^/]*$/.test(name));
  return stages.some((stage) => existsSync(join(folder, stage, file)));
}
