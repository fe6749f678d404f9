import { createHash } from 'node:crypto';
import { SHIPPED_LEAP_SECONDS_LIST } from '#shared/time/shipped-leap-seconds';

/** What is changed of the list that came with the program; NTP seconds. */
interface Changed {
  readonly expiresNtpS?: number;
  /** Rows behind the last, as NTP seconds and TAI - UTC. */
  readonly more?: readonly (readonly [ntpS: number, taiMinusUtcS: number])[];
  /** How many rows are left off at the end. */
  readonly fewer?: number;
}

/**
 * A leap-second list in the form of the IERS file, with its hash made anew: SHA-1 over the digits of update, expiry and rows, as the comments of
 * leap-seconds.list say.
 */
export function leapSecondsFile({ expiresNtpS, more = [], fewer = 0 }: Changed = {}): string {
  const [, updated = ''] = /^#\$\s+(\d+)/m.exec(SHIPPED_LEAP_SECONDS_LIST) ?? [];
  const [, shippedExpires = ''] = /^#@\s+(\d+)/m.exec(SHIPPED_LEAP_SECONDS_LIST) ?? [];
  const shipped = [...SHIPPED_LEAP_SECONDS_LIST.matchAll(/^(\d+)\s+(\d+)/gm)].map(([, ntpS = '', s = '']) => [ntpS, s] as const);
  const rows = [...shipped.slice(0, shipped.length - fewer), ...more.map(([ntpS, s]) => [String(ntpS), String(s)] as const)];
  const expires = expiresNtpS === undefined ? shippedExpires : String(expiresNtpS);
  const digits = updated + expires + rows.map(([ntpS, s]) => ntpS + s).join('');
  const words = createHash('sha1').update(digits).digest('hex').match(/.{8}/g) ?? [];
  return [`#$\t${updated}`, `#@\t${expires}`, ...rows.map((row) => row.join('\t')), `#h\t${words.join(' ')}`, ''].join('\n');
}
