import { compareInstants, type Instant } from '#shared/time/instant';
import { createTaiWriter } from '#shared/time/format';

/** A stretch as far as its place in the record goes. */
interface Stretch {
  readonly segment: number;
  readonly from: Instant;
}

const SHOWN_DECIMALS = 0;

/**
 * Says what a change of a clock record does to the times for which it speaks: in a record without overlaps or gaps an addition shortens the
 * stretch before it, an end lengthens it, and the first stretch says from when on readings can be reconciled at all.
 *
 * @param before stretches in force before the change, in order
 * @param after the same after it
 * @returns a sentence each
 */
export function effectsOf(before: readonly Stretch[], after: readonly Stretch[]): string[] {
  const effects: string[] = [];
  for (const [at, { segment, from }] of after.entries()) {
    const until = after[at + 1];
    const old = before.findIndex((one) => one.segment === segment);
    const wasUntil = before[old + 1];
    const wasFrom = before[old]?.from;
    if (wasFrom && isSame(wasFrom, from) && isSame(wasUntil?.from, until?.from)) continue;
    const now = `from ${text(from)} ${untilText(until)}`;
    effects.push(
      wasFrom
        ? `Segment ${segment} now holds ${now}; it held from ${text(wasFrom)} ${untilText(wasUntil)}.`
        : `Segment ${segment} holds ${now}.`,
    );
  }
  for (const { segment } of before) if (!after.some((one) => one.segment === segment)) effects.push(`Segment ${segment} holds no more.`);
  const first = after[0];
  if (!first) effects.push('The clock has no record any more: readings by it are set aside.');
  else if (!isSame(before[0]?.from, first.from))
    effects.push(`Readings before ${text(first.from)} have no clock record and are set aside.`);
  return effects;
}

const isSame = (a: Instant | undefined, b: Instant | undefined): boolean => (a && b ? compareInstants(a, b) === 0 : a === b);

const text = (instant: Instant): string => `${createTaiWriter(SHOWN_DECIMALS)(instant)} TAI`;

const untilText = (next: Stretch | undefined): string =>
  next ? `until ${text(next.from)}, where segment ${next.segment} begins` : 'on, for good';
