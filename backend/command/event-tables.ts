import { type IntervalClass, verdictOf, type Verdict } from '#shared/relativity/verdict';
import { intervalM2, properDistanceM, properTimeS } from '#shared/relativity/interval';
import { frameDtNs, frameSigmaNs, orderFrom, turningOf } from '#shared/relativity/order';
import { type Pair, pairOf } from '#shared/relativity/pair';
import { type FourVelocity } from '#shared/relativity/velocity';
import { type Instant } from '#shared/time/instant';
import { createTaiWriter } from '#shared/time/format';
import { type Network } from '#shared/reconcile/network';
import { type ResultFile } from './result-folder';
import { type SortedEvents } from './sorted-events';

/** Column names of the tables, without `set` where a table of pairs has none. */
const PAIR_COLUMNS =
  'a,b,dt_ns,distance_m,sigma_dt_ns,sigma_gap_ns,margin_sigma,reverse_margin_sigma,interval_m2,class,proper,turning_speed,turning_sigma,toward_x,toward_y,toward_z';

export const HEADERS = {
  events: 'site,series,sequence,kind,tai,sigma_ns,sigma_from,x_m,y_m,z_m,amplitude\n',
  coincidences: 'set,fold,sites,first_tai,span_ns,events\n',
  pairs: `set,${PAIR_COLUMNS}\n`,
  neighbours: `${PAIR_COLUMNS}\n`,
  orders: 'set,a,b,frame,dt_ns,sigma_ns,order\n',
  crowded: 'event,sites,events,sets_at_least\n',
  setAside: 'file,line,reason,text\n',
} as const;

/** The instant of a row. */
export const instantOfEvent = ({ events }: SortedEvents, event: number): Instant => ({
  taiS: events.taiS[event] ?? 0,
  ps: events.ps[event] ?? 0,
});

/** Makes the function that writes an event as a line of `events.csv`. */
export function eventWriter(network: Network, sorted: SortedEvents, file: ResultFile): (event: number) => void {
  const codes = network.sites.map(({ code }) => code);
  const taiText = createTaiWriter();
  const { events, amplitude } = sorted;
  return (event) => {
    file.text(codes[events.site[event] ?? 0] ?? '').comma();
    file.text(sorted.seriesText(event)).comma();
    file.text(sorted.sequenceText(event)).comma();
    file.text(sorted.kindText(event)).comma();
    file.text(taiText(instantOfEvent(sorted, event))).comma();
    file.number(events.sigmaNs[event] ?? 0).comma();
    file.text(sorted.sigmaSourceText(event)).comma();
    file.number(events.xM[event] ?? 0).comma();
    file.number(events.yM[event] ?? 0).comma();
    file.number(events.zM[event] ?? 0).comma();
    const size = amplitude[event] ?? NaN;
    if (!Number.isNaN(size)) file.number(size);
    file.endLine();
  };
}

function writeVerdict(pair: Pair, verdict: Verdict, file: ResultFile): void {
  const interval = intervalM2(pair.dtNs, pair.distanceM);
  file.number(pair.dtNs).comma().number(pair.distanceM).comma();
  file.number(pair.sigmaDtNs).comma().number(verdict.sigmaGapNs).comma();
  file.number(verdict.marginSigma).comma().number(verdict.reverseMarginSigma).comma();
  file.number(interval).comma().text(verdict.class).comma();
  switch (verdict.class) {
    case 'timelike':
      file.number(properTimeS(interval)).text(',,,,,\n');
      return;
    case 'undecided':
      file.text(',,,,,\n');
      return;
    case 'spacelike': {
      const { speedC, sigmaC, toward } = turningOf(pair);
      file.number(properDistanceM(interval)).comma().number(speedC).comma().number(sigmaC).comma();
      file.number(toward[0]).comma().number(toward[1]).comma().number(toward[2]).endLine();
    }
  }
}

/** How many pairs of each class were written. */
export type ClassCounts = Record<IntervalClass, number>;

/** A frame at the instant of a set. */
interface FrameAtSet {
  readonly code: string;
  readonly velocity: FourVelocity;
}

/**
 * Writes pairs: their numbers, and their orders in the frames of the network.
 *
 * @param network rule, frames and errors
 * @param sorted the events; pairs are (earlier, later) in their order
 */
export class PairWriter {
  readonly counts: ClassCounts = { timelike: 0, spacelike: 0, undecided: 0 };

  constructor(
    private readonly network: Network,
    private readonly sorted: SortedEvents,
  ) {}

  /** All pairs of a set, and their orders in every frame, taken at the set's first event. `rows` ascend; `names` are theirs. */
  writeSet(set: string, rows: readonly number[], names: readonly string[], files: { pairs: ResultFile; orders: ResultFile }): void {
    const frames = rows.length > 1 ? this.framesAt(rows[0] ?? 0) : [];
    for (let first = 0; first < rows.length; first++) {
      for (let second = first + 1; second < rows.length; second++) {
        const pair = this.pairAt(rows[first] ?? 0, rows[second] ?? 0);
        const label = `${set},${names[first] ?? ''},${names[second] ?? ''},`;
        const verdict = verdictOf(pair, this.network.rule.sigmas);
        this.counts[verdict.class]++;
        writeVerdict(pair, verdict, files.pairs.text(label));
        for (const { code, velocity } of frames) this.writeOrder(pair, velocity, files.orders.text(label).text(code).comma());
      }
    }
  }

  /** One pair without a set; answers its class. */
  writePair(a: number, b: number, file: ResultFile): IntervalClass {
    const pair = this.pairAt(a, b);
    const verdict = verdictOf(pair, this.network.rule.sigmas);
    writeVerdict(pair, verdict, file.text(this.sorted.name(a)).comma().text(this.sorted.name(b)).comma());
    return verdict.class;
  }

  private pairAt(a: number, b: number): Pair {
    return pairOf(this.sorted.events, this.network.errors, a, b);
  }

  private writeOrder(pair: Pair, velocity: FourVelocity, file: ResultFile): void {
    const dtNs = frameDtNs(pair, velocity);
    const sigmaNs = frameSigmaNs(pair, velocity);
    file
      .number(dtNs)
      .comma()
      .number(sigmaNs)
      .comma()
      .text(orderFrom(dtNs, sigmaNs, this.network.rule.sigmas))
      .endLine();
  }

  private framesAt(event: number): readonly FrameAtSet[] {
    const instant = instantOfEvent(this.sorted, event);
    return this.network.frames.codes.map((code) => ({ code, velocity: velocityAt(this.network, code, instant) }));
  }
}

/** A frame's velocity at an instant; a frame that cannot be had there ends the command. */
export function velocityAt(network: Network, code: string, instant: Instant): FourVelocity {
  const velocity = network.frames.velocityAt(code, instant);
  if (!velocity.ok) throw new Error(`${velocity.problem.where}: ${velocity.problem.text}`);
  return velocity.value;
}
