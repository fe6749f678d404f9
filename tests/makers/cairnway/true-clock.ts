import { CLOCKS, REFERENCES, type SegmentEntry, type SiteEntry } from './network';
import { type Random } from './random';
import { elapsed, type ElapsedPs } from './time-text';

interface TrueSegment {
  readonly from: ElapsedPs;
  readonly at: ElapsedPs;
  readonly offsetNs: number;
  readonly rateNsPerDay: number;
}

const PS_PER_DAY = 86_400e12;

/** What a segment's clock truly did: the record, off by draws of the errors that it states. */
function trueSegment(entry: SegmentEntry, referenceNs: number, random: Random): TrueSegment {
  const { offset_sigma_ns, rate_sigma_ns_per_day: rateSigma = 0, covariance_ns2_per_day: covariance = 0 } = entry;
  const [first, second] = [random.normal(), random.normal()];
  const correlation = rateSigma === 0 ? 0 : covariance / (offset_sigma_ns * rateSigma);
  const from = statedTime(entry.from);
  return {
    from,
    at: entry.at === undefined ? from : statedTime(entry.at),
    offsetNs: entry.offset_ns + offset_sigma_ns * first + referenceNs,
    rateNsPerDay: (entry.rate_ns_per_day ?? 0) + rateSigma * (correlation * first + Math.sqrt(1 - correlation ** 2) * second),
  };
}

/** The times that the network file states, before 2016-12-31 included. */
function statedTime(text: string): ElapsedPs {
  const [date = '', rest = ''] = text.split('T');
  const behindS = text.endsWith('TAI') ? 36n : text.endsWith('GPS') ? 17n : 0n;
  const dayLater = date === '2017-01-01' ? 1 : 0;
  const before = date === '2016-12-30' ? 86_400n : 0n;
  return elapsed(rest.slice(0, 8), dayLater) - (behindS + before) * 10n ** 12n;
}

/** Says what the clock of a site truly shows ahead of the time at which the detector's pulse reaches it, in ps. */
export type TrueClock = (pulse: ElapsedPs) => number;

/** Draws the true clocks; sites that name one clock have one. */
export function trueClocks(random: Random): (site: SiteEntry) => TrueClock {
  const references = new Map<string, number>(REFERENCES.map(({ code, sigma_ns }) => [code, sigma_ns * random.normal()]));
  const clocks = new Map(
    CLOCKS.map(({ code, segments }) => [code, segments.map((entry) => trueSegment(entry, references.get(entry.reference) ?? 0, random))]),
  );
  return (site) => (pulse) => {
    const segment = clocks.get(site.clock)?.findLast(({ from }) => from <= pulse) ?? clocks.get(site.clock)?.[0];
    if (!segment) return 0;
    return (segment.offsetNs + (segment.rateNsPerDay * Number(pulse - segment.at)) / PS_PER_DAY) * 1000;
  };
}
