import { existsSync, mkdirSync, statSync } from 'node:fs';
import { dirname } from 'node:path';

/**
 * Makes a folder and those above it that are absent, one by one.
 *
 * In Node 20 the recursive making of folders never ends where one cannot be made below a folder that exists, as in /proc.
 *
 * @param path absolute path
 * @param mode permissions of the folders that are made, less the umask
 * @throws the system's fault where one cannot be made
 */
export function makeFolders(path: string, mode = 0o777): void {
  const absent: string[] = [];
  for (let at = path; !existsSync(at) && dirname(at) !== at; at = dirname(at)) absent.push(at);
  for (const folder of absent.reverse()) {
    try {
      mkdirSync(folder, mode);
    } catch (fault) {
      // Another process may have made it meanwhile.
      if (!statSync(folder, { throwIfNoEntry: false })?.isDirectory()) throw fault;
    }
  }
}
