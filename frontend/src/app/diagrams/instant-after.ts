import { type Instant, instantOf } from '#shared/time/instant';

const MS_PER_S = 1e3;
const PS_PER_MS = 1e9;

/** The instant so many milliseconds after another, of any sign: for what is drawn, to a few picoseconds within an hour. */
export function instantAfter(origin: Instant, ms: number): Instant {
  const wholeS = Math.floor(ms / MS_PER_S);
  return instantOf(origin.taiS + wholeS, origin.ps + Math.round((ms - wholeS * MS_PER_S) * PS_PER_MS));
}
