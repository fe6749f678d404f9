import { parseCookie, stringifySetCookie } from 'cookie';
import { type Exchange } from '../api/exchange';

/** The cookies of a session: `__Host-` binds them to this host, its whole path and https. Scripts cannot read them. */
export const ACCESS_COOKIE = '__Host-skewline-access';
export const REFRESH_COOKIE = '__Host-skewline-refresh';

const MOST_COOKIE_CHARACTERS = 2_048;

/** The value of a cookie; undefined when it is absent or longer than any of ours. */
export function cookieOf({ header }: Pick<Exchange, 'header'>, name: string): string | undefined {
  const value = parseCookie(header('cookie') ?? '')[name];
  return value !== undefined && value.length <= MOST_COOKIE_CHARACTERS ? value : undefined;
}

/** Sets a cookie of a session. Chromium keeps a Secure one over plain http on this machine, and drops a `__Host-` one that is not Secure. */
export function setCookie({ reply }: Exchange, name: string, value: string, maxAgeS: number): void {
  reply.add(
    'Set-Cookie',
    stringifySetCookie({ name, value, maxAge: maxAgeS, path: '/', httpOnly: true, secure: true, sameSite: 'strict' }),
  );
}

/** Takes both cookies of a session away. */
export function clearCookies(exchange: Exchange): void {
  for (const name of [ACCESS_COOKIE, REFRESH_COOKIE]) setCookie(exchange, name, '', 0);
}
