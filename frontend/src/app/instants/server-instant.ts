import { parseStatedTime } from '#shared/time/stated-time';
import { type Instant } from '#shared/time/instant';
import { shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';

/** The list by which this page converts UTC. */
export const LEAP_SECONDS = shippedLeapSeconds();

/**
 * The instant that the server's clock wrote, as ISO 8601 in UTC with milliseconds.
 *
 * @throws when it is none: the contract's schemas let no such text through
 */
export function serverInstant(utcText: string): Instant {
  const stated = parseStatedTime(utcText, 'time', LEAP_SECONDS);
  if (!stated.ok) throw new Error(stated.problem.text);
  return stated.value.instant;
}

/** The instant that this device's clock shows; no verdict is ever computed from it. */
export const deviceInstant = (): Instant => serverInstant(new Date().toISOString());
