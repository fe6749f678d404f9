import { type Tree } from './tree';

/** Hosts whose addresses stand in scripts as names (of XML namespaces, of JSON Schema, in the leap-second list) or in the words of an error, and are never asked. */
const NAMES_ONLY = new Set(['www.w3.org', 'json-schema.org', 'angular.dev', 'g.co', 'github.com', 'hpiers.obspm.fr', 'socket.io']);

/** Faults of the built front end: an address of another machine that a page, a style or a script would fetch. */
export function remoteUrls(built: Tree): string[] {
  const faults: string[] = [];
  for (const [path, text] of built) {
    const found = path.endsWith('.js')
      ? text.matchAll(/\bhttps?:\/\/([a-z0-9.-]+)/gi)
      : text.matchAll(/(?:https?:)?\/\/([a-z0-9-]+(?:\.[a-z0-9-]+)+)/gi);
    for (const [address, host = ''] of found)
      if (!NAMES_ONLY.has(host))
        faults.push(`${path} names ${address}: serve the file from static/ instead, or list the host as a name that is never fetched.`);
  }
  return faults;
}
