import { type SiteRecord } from '#shared/contract/site-record';
import { type Instant } from '#shared/time/instant';
import { seededRandom } from '../makers/quiet-network';

/** Since 2017-01-01, by IERS Bulletin C; no leap second is announced. */
const TAI_MINUS_UTC_S = 37;
const NS_PER_S = 1e9;
/** More than all delays and clock errors of the network. */
const MARGIN_NS = 1e6;

/** One site's triggers, a Poisson process, each with its number and reading. */
export class SiteTriggers {
  private sequence = 0;
  private readonly random: () => number;
  /** Of the next trigger, UTC. */
  private atS: number;
  private atNs: number;
  private secondText = '';
  private textOfS = NaN;

  /**
   * @param series the numbering
   * @param fromMs where they begin, UTC since 1970
   */
  constructor(
    private readonly series: string,
    private readonly rateHz: number,
    fromMs: number,
    seed: number,
  ) {
    this.random = seededRandom(seed);
    this.atS = Math.floor(fromMs / 1e3);
    this.atNs = (fromMs - this.atS * 1e3) * 1e6;
    this.step();
  }

  /** When the next trigger happens, ms since 1970 UTC. */
  get nextMs(): number {
    return this.atS * 1e3 + this.atNs / 1e6;
  }

  /** Everything before this has been taken. */
  get completeTo(): Instant {
    const ns = this.atNs - MARGIN_NS;
    const s = ns < 0 ? this.atS - 1 : this.atS;
    return { taiS: s + TAI_MINUS_UTC_S, ps: Math.floor(ns < 0 ? ns + NS_PER_S : ns) * 1e3 };
  }

  take(): SiteRecord {
    if (this.textOfS !== this.atS) {
      this.textOfS = this.atS;
      this.secondText = new Date(this.atS * 1e3).toISOString().slice(0, 19);
    }
    const record: SiteRecord = {
      series: this.series,
      sequence: String(++this.sequence),
      kind: '',
      reading: `${this.secondText}.${String(Math.floor(this.atNs)).padStart(9, '0')}`,
      readingForm: 'iso',
      sigmaNs: String(15 + Math.floor(10 * this.random())),
      amplitude: (10 * this.random()).toFixed(2),
    };
    this.step();
    return record;
  }

  private step(): void {
    this.atNs -= (Math.log(1 - this.random()) / this.rateHz) * NS_PER_S;
    while (this.atNs >= NS_PER_S) {
      this.atNs -= NS_PER_S;
      this.atS++;
    }
  }
}
