import { type Exchange } from './exchange';
import { Refusal } from './refusal';

const LOCAL_HOSTS = ['localhost', '127.0.0.1', '[::1]'];

/**
 * Refuses a request that would change something and comes from another site's page, or is not JSON (which no form can send).
 *
 * A browser says where a request comes from by Sec-Fetch-Site and Origin, neither of which a page can forge; a program says nothing, and
 * has no cookies that it was not given. Outside production a page of this machine counts as ours when the browser says that it is the same
 * origin: the development server passes requests on from its own port.
 *
 * @param header the headers of a request by a method that changes things
 * @param ours the server's own origin
 * @param production whether the origin must be ours to the letter
 * @throws Refusal 403 or 415
 */
export function refuseForeign({ header }: Pick<Exchange, 'header'>, ours: string, production: boolean): void {
  const site = header('sec-fetch-site');
  const origin = header('origin');
  if ((site !== undefined && site !== 'same-origin') || (origin !== undefined && !isOurs(origin, ours, site, production)))
    throw new Refusal(403, 'Not allowed', 'A page of another site asked for this change.');
  if (!/^application\/json\s*(?:;|$)/i.test(header('content-type') ?? ''))
    throw new Refusal(415, 'Unusable request', 'The body must be JSON: Content-Type: application/json.');
}

const isOurs = (origin: string, ours: string, site: string | undefined, production: boolean): boolean =>
  origin === ours || (!production && site === 'same-origin' && isOfThisMachine(origin));

/** Whether an origin is a page of this machine, by any port. */
export const isOfThisMachine = (origin: string): boolean => URL.canParse(origin) && LOCAL_HOSTS.includes(new URL(origin).hostname);
