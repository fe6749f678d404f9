import { realpathSync } from 'node:fs';
import { basename, dirname, join } from 'node:path';
import { UsageProblem } from './usage-problem';

/** The names of all result files. */
const RESULT_NAMES: ReadonlySet<string> = new Set([
  'events.csv',
  'coincidences.csv',
  'pairs.csv',
  'orders.csv',
  'crowded.csv',
  'neighbours.csv',
  'set-aside.csv',
  'summary.json',
]);

/** Where a path leads when links are followed; undefined where nothing is. */
function realPath(path: string): string | undefined {
  try {
    return realpathSync(path);
  } catch {
    return undefined;
  }
}

/**
 * Refuses an input that stands in the folder of results under a result's name, since the result would take its place.
 *
 * @param out the folder of results, which need not exist
 * @param inputs paths of the files that are read
 */
export function keepInputs(out: string, inputs: readonly string[]): void {
  const folder = realPath(out);
  if (folder === undefined) return;
  for (const path of inputs) {
    // A link among the results would be replaced, and a link to one of them would show the new one.
    const places = [join(realPath(dirname(path)) ?? '', basename(path)), realPath(path) ?? ''];
    if (places.some((place) => dirname(place) === folder && RESULT_NAMES.has(basename(place))))
      throw new UsageProblem(`--out: the results in "${out}" would take the place of ${path}; name another folder`);
  }
}
