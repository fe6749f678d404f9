const BROWSERS = [
  ['Edg/', 'Edge'],
  ['OPR/', 'Opera'],
  ['Firefox/', 'Firefox'],
  ['Chrome/', 'Chromium'],
  ['Safari/', 'Safari'],
] as const;
const SYSTEMS = [
  ['Android', 'Android'],
  ['iPhone', 'iPhone'],
  ['iPad', 'iPad'],
  ['Windows', 'Windows'],
  ['Mac OS X', 'macOS'],
  ['Linux', 'Linux'],
] as const;

/** What a person would call the browser that sent this user-agent text; what is not known stays as it was sent. */
export function browserWords(userAgent: string): string {
  const browser = BROWSERS.find(([sign]) => userAgent.includes(sign))?.[1];
  const system = SYSTEMS.find(([sign]) => userAgent.includes(sign))?.[1];
  if (browser === undefined) return userAgent === '' ? 'A program without a name' : userAgent;
  return system === undefined ? browser : `${browser} on ${system}`;
}
