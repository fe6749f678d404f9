import { tickStep } from 'd3';
import { type Instant } from '#shared/time/instant';
import { type Scale as TimeScale } from '#shared/time/scales';
import { instantParts } from '../instants/instant-parts';
import { instantAfter } from './instant-after';
import { type Scale } from './one-scale';
import { type Tick } from './picture';

const MS_PER_S = 1e3;
const ROUNDING_MS = 1e-3; // a tick at a whole second is not printed as the one before
const PX_PER_TICK = 90;
const CLOCK_STEPS_MS = [1, 2, 5, 10, 15, 20, 30, 60, 120, 300, 600, 900, 1800, 3600, 7200, 21_600].map((s) => s * MS_PER_S);

/** Ticks of a time axis, and what its title says of the part of the time that they leave out. */
export interface TimeTicks {
  readonly ticks: readonly Tick[];
  readonly title: string;
  /** Between two ticks, ms. */
  readonly stepMs: number;
}

/**
 * Ticks of a time axis at whole values of the scale in which instants are printed.
 *
 * @param y from ms after the origin to px
 * @param origin of the axis
 * @param scale in which instants are printed
 * @param within what is shown, ms from the origin on
 */
export function timeTicks(y: Scale, origin: Instant, scale: TimeScale): TimeTicks {
  const [topMs = 0, bottomMs = 0] = y.domain();
  const [top = 0, bottom = 0] = y.range();
  const count = Math.max(2, (bottom - top) / PX_PER_TICK);
  const { date, clock, groups, scale: printed } = instantParts(origin, scale, 12);
  // Milliseconds of the origin within its second, as printed; the last digits are beyond any pixel.
  const withinMs = Number(`${groups[0] ?? '0'}.${(groups[1] ?? '') + (groups[2] ?? '') + (groups[3] ?? '')}`);
  const even = tickStep(bottomMs, topMs, count);
  const stepMs = even >= MS_PER_S ? (CLOCK_STEPS_MS.find((step) => step >= even) ?? even) : even;
  const ticks: Tick[] = [];
  const [hours = 0, minutes = 0, seconds = 0] = clock.split(':').map(Number);
  const offsetMs = stepMs >= MS_PER_S ? ((hours * 60 + minutes) * 60 + seconds) * MS_PER_S + withinMs : withinMs;
  const decimals = Math.max(3, 3 + Math.ceil(-Math.log10(stepMs) - 1e-9));
  for (let k = Math.ceil((bottomMs + offsetMs) / stepMs - 1e-9); k * stepMs <= topMs + offsetMs + 1e-9; k++) {
    const ms = k * stepMs - offsetMs;
    ticks.push({ at: y(ms), text: stepMs >= MS_PER_S ? clockText(origin, ms, scale) : secondText(k * stepMs, seconds, decimals) });
  }
  const title = stepMs >= MS_PER_S ? `${printed}, ${date}` : `${printed}, seconds within ${clock}`;
  return { ticks, title, stepMs };
}

const clockText = (origin: Instant, ms: number, scale: TimeScale): string =>
  instantParts(instantAfter(origin, ms + ROUNDING_MS), scale, 0).clock;

/** `.350` within the origin's second, `08.010` in another. */
function secondText(ms: number, originSecond: number, decimals: number): string {
  const second = Math.floor(ms / MS_PER_S + 1e-9);
  const fraction = (ms / MS_PER_S - second).toFixed(decimals).slice(1);
  return second === 0 ? fraction : `${String((((originSecond + second) % 60) + 60) % 60).padStart(2, '0')}${fraction}`;
}

/** Ticks of an axis of light-time or of time from an event on. */
export function plainTicks(scale: Scale, pxPerTick: number, slanted: boolean): Tick[] {
  const [a = 0, b = 0] = scale.range();
  const ticks = scale.ticks(Math.max(2, Math.abs(b - a) / pxPerTick));
  const format = scale.tickFormat(Math.max(2, Math.abs(b - a) / pxPerTick));
  return ticks.map((value) => ({ at: scale(value), text: format(value).replace(/,/g, '\u202f'), slanted }));
}
