/** The least versions without known holes that matter to a server which reads what strangers send. */
const LEAST: Readonly<Record<string, string>> = {
  'socket.io-parser': '4.2.7',
  ws: '8.17.1',
  'body-parser': '2.2.1',
  'path-to-regexp': '8.4.0',
  multer: '2.3.0',
  jsonwebtoken: '9.0.0',
};

/** Faults of the lock file: a package below its least version, wherever it is nested. */
export function belowLeast(lockFile: string): string[] {
  const { packages } = JSON.parse(lockFile) as { packages: Record<string, { version?: string }> };
  return Object.entries(packages).flatMap(([path, { version = '0.0.0' }]) => {
    const name = path.slice(path.lastIndexOf('node_modules/') + 'node_modules/'.length);
    const least = LEAST[name];
    if (!path.startsWith('node_modules/') || least === undefined || !isBelow(version, least)) return [];
    return [
      `package-lock.json has ${path} ${version}: it must be at least ${least}; npm install ${name}@${least}, or renew what asks for it.`,
    ];
  });
}

function isBelow(version: string, least: string): boolean {
  const numbers = (text: string): number[] => (text.split('-')[0] ?? '').split('.').map(Number);
  const [have, need] = [numbers(version), numbers(least)];
  const differs = need.findIndex((number, place) => have[place] !== number);
  return differs >= 0 && (have[differs] ?? 0) < (need[differs] ?? 0);
}
