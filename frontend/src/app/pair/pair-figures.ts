import { C_M_S } from '#shared/constants';
import { plain, timeText, withUnit } from '../desk/figures';

/** A unit of time, and with light before its name one of length. */
export interface TimeUnit {
  readonly name: 's' | 'ms' | '\u00b5s' | 'ns' | 'ps';
  readonly ns: number;
}

const UNITS: readonly TimeUnit[] = [
  { name: 's', ns: 1e9 },
  { name: 'ms', ns: 1e6 },
  { name: '\u00b5s', ns: 1e3 },
  { name: 'ns', ns: 1 },
  { name: 'ps', ns: 1e-3 },
];
const LEAST_NS = 0.1;
const SMALLEST: TimeUnit = { name: 'ps', ns: 1e-3 };

/** The largest unit in which a time is at least so many. */
export const unitFor = (ns: number, least = 1): TimeUnit => UNITS.find((unit) => Math.abs(ns) >= least * unit.ns) ?? SMALLEST;

/** A time in the unit that fits; of one that is too short for a figure, that it is so. */
export const smallTimeText = (ns: number): string => (ns > 0 && ns < LEAST_NS ? withUnit(`<\u00a0${LEAST_NS}`, 'ns') : timeText(ns));

/** A length in the unit that fits. */
export function lengthText(metres: number): string {
  const size = Math.abs(metres);
  if (size >= 1e6) return withUnit(plain(metres / 1e3, 0), 'km');
  if (size >= 1e3) return withUnit(plain(metres / 1e3, 3), 'km');
  if (size >= 1) return withUnit(plain(metres, 2), 'm');
  return withUnit(plain(metres * 1e3, 2), 'mm');
}

/** A length as light-time: 33.463 light-ms. */
export function lightText(metres: number): string {
  const ns = (metres / C_M_S) * 1e9;
  const unit = unitFor(ns);
  return withUnit(plain(ns / unit.ns, 3), `light-${unit.name}`);
}

/** An interval in squares of the light-time that fits, with its standard error: \u22121119.8 ± 0.2 light-ms\u00b2. */
export function intervalText(intervalM2: number, sigmaM2: number): string {
  const unit = unitFor((Math.sqrt(Math.max(Math.abs(intervalM2), sigmaM2)) / C_M_S) * 1e9);
  const inUnits = (m2: number): number => m2 / ((C_M_S * unit.ns) / 1e9) ** 2;
  const value = inUnits(intervalM2);
  const sigma = inUnits(sigmaM2);
  const decimals = sigma > 0 ? Math.min(6, Math.max(0, 1 - Math.floor(Math.log10(sigma)))) : 6;
  return withUnit(`${plain(value, decimals)}\u00a0\u00b1\u00a0${plain(sigma, decimals)}`, `light-${unit.name}\u00b2`);
}

/** One standard error of (c dt)^2 - d^2, m^2, from those of both lengths, metres. */
export const intervalSigmaM2 = (ctM: number, distanceM: number, sigmaCtM: number, sigmaDM: number): number =>
  2 * Math.hypot(ctM * sigmaCtM, distanceM * sigmaDM);

/** A speed in c with so many digits that a slow frame is more than 0.000. */
export function speedText(speedC: number): string {
  if (speedC === 0) return '0';
  const size = Math.abs(speedC);
  return `${speedC < 0 ? '\u2212' : '+'}${size.toFixed(size < 0.0095 ? 5 : 3)}`;
}

/** How fast a frame is, in the unit that fits: 30.2 km/s, 0.600 c. */
export function paceText(speedC: number): string {
  return speedC < 0.01 ? withUnit(((speedC * C_M_S) / 1e3).toFixed(1), 'km/s') : withUnit(speedC.toFixed(3), 'c');
}
