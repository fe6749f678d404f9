import { type NetworkFile } from '#shared/contract/network-file';
import { timeAt } from '#shared/contract/network-times';
import { S_PER_DAY } from '#shared/constants';
import { compareInstants, secondsBetween, type Instant } from '#shared/time/instant';
import { type LeapSecondTable } from '#shared/time/leap-seconds';
import { type Random } from './random';

type FileClocks = NonNullable<NetworkFile['clocks']>;
type FileSegment = FileClocks[number]['segments'][number];

interface TrueSegment {
  readonly from: Instant;
  readonly at: Instant;
  readonly offsetNs: number;
  readonly rateNsPerDay: number;
}

/** What a clock truly shows beyond the instant at which a pulse reaches it, ns. */
export type TrueClock = (pulse: Instant) => number;

const instantOf = (text: string, table: LeapSecondTable): Instant => {
  const time = timeAt(text, 'clocks', table);
  if (!time.ok) throw new Error(`the demo's own ${text}: ${time.problem.text}`);
  return time.value;
};

/** What a segment's clock truly did: the record, off by draws of the errors that it states. */
function trueSegment(stated: FileSegment, referenceNs: number, table: LeapSecondTable, random: Random): TrueSegment {
  const { offset_sigma_ns, rate_sigma_ns_per_day: rateSigma = 0, covariance_ns2_per_day: covariance = 0 } = stated;
  const [first, second] = [random.normal(), random.normal()];
  const correlation = offset_sigma_ns * rateSigma === 0 ? 0 : covariance / (offset_sigma_ns * rateSigma);
  return {
    from: instantOf(stated.from, table),
    at: instantOf(stated.at ?? stated.from, table),
    offsetNs: stated.offset_ns + offset_sigma_ns * first + referenceNs,
    rateNsPerDay: (stated.rate_ns_per_day ?? 0) + rateSigma * (correlation * first + Math.sqrt(1 - correlation ** 2) * second),
  };
}

/**
 * Draws what the clocks of a network truly show, by the errors that their records state.
 *
 * @param file references and clocks; the error of a reference is common to all segments that name it
 * @returns the true clock of each code; `exact` shows the instant itself
 */
export function trueClocks(
  file: Pick<NetworkFile, 'references' | 'clocks'>,
  table: LeapSecondTable,
  random: Random,
): (code: string) => TrueClock {
  const references = new Map((file.references ?? []).map(({ code, sigma_ns = 0 }) => [code, sigma_ns * random.normal()]));
  const clocks = new Map(
    (file.clocks ?? []).map(({ code, segments }) => [
      code,
      segments.map((stated) => trueSegment(stated, references.get(stated.reference ?? '') ?? 0, table, random)),
    ]),
  );
  return (code) => {
    const segments = clocks.get(code) ?? [];
    return (pulse) => {
      const segment = segments.findLast(({ from }) => compareInstants(from, pulse) <= 0) ?? segments[0];
      return segment ? segment.offsetNs + (segment.rateNsPerDay * secondsBetween(segment.at, pulse)) / S_PER_DAY : 0;
    };
  };
}
