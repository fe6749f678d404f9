import { readFileSync, statSync } from 'node:fs';
import { faultText } from './fault-text';
import { UsageProblem } from './usage-problem';

/**
 * Size of a file that will be read twice, bytes; what cannot be read so is a usage problem.
 *
 * @param path as the user gave it
 * @param before what the message begins with, such as the option that named the file
 */
export function checkReadable(path: string, before = ''): number {
  try {
    const stat = statSync(path);
    if (stat.isFile()) return stat.size;
  } catch (fault) {
    throw new UsageProblem(`${before}${path}: cannot be read (${faultText(fault)}); a CSV file is needed`);
  }
  throw new UsageProblem(`${before}${path}: is not a file; it is read twice, so it must be a file and no pipe or folder`);
}

/** Reads a text file named by an option; a file that cannot be read is a usage problem. */
export function readOption(option: string, path: string): string {
  try {
    return readFileSync(path, 'utf8');
  } catch (fault) {
    throw new UsageProblem(`${option}: ${path} cannot be read (${faultText(fault)})`);
  }
}
