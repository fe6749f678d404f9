import { C_M_S } from '#shared/constants';
import { type EventColumns } from '#shared/relativity/events';
import { type Speed } from '#shared/relativity/speed';
import { type Vec3 } from '#shared/relativity/vector';
import { MS_PER_LIGHT_M } from './light-ms';

/** Where events stand in a diagram, one row an event: along the axis and in time, both from one event on, light-ms and ms. */
export interface Plane {
  readonly count: number;
  readonly xMs: Float64Array;
  readonly tMs: Float64Array;
}

/** Room for so many events. */
export const emptyPlane = (count: number): Plane => ({ count, xMs: new Float64Array(count), tMs: new Float64Array(count) });

/**
 * Events around one of them: across stands the light-time from that event's place to each event's own, so that its light cone is exact
 * against every mark.
 *
 * @param events geocentric, in any order
 * @param row of the event that they are seen from
 * @returns times and light-times from it on; to a picosecond in 1,000 s
 */
export function aroundEvent(events: EventColumns, row: number): Plane {
  const plane = emptyPlane(events.count);
  const [x0, y0, z0] = placeOf(events, row);
  for (let i = 0; i < events.count; i++) {
    const dx = (events.xM[i] ?? 0) - x0;
    const dy = (events.yM[i] ?? 0) - y0;
    const dz = (events.zM[i] ?? 0) - z0;
    plane.xMs[i] = Math.sqrt(dx * dx + dy * dy + dz * dz) * MS_PER_LIGHT_M;
    plane.tMs[i] = msBetween(events, row, i);
  }
  return plane;
}

/**
 * Events along a direction through one of them: across stands the signed distance along it. Exact for events on it, and for all events in
 * what frames that move along it make of their times and of their places along it.
 *
 * @param events geocentric, in any order
 * @param row of the event at the origin
 * @param toward unit vector of the direction, GCRS axes
 */
export function alongDirection(events: EventColumns, row: number, toward: Vec3): Plane {
  const plane = emptyPlane(events.count);
  const [x0, y0, z0] = placeOf(events, row);
  for (let i = 0; i < events.count; i++) {
    const alongM = ((events.xM[i] ?? 0) - x0) * toward[0] + ((events.yM[i] ?? 0) - y0) * toward[1] + ((events.zM[i] ?? 0) - z0) * toward[2];
    plane.xMs[i] = alongM * MS_PER_LIGHT_M;
    plane.tMs[i] = msBetween(events, row, i);
  }
  return plane;
}

/**
 * The same events as a frame places them that moves along the axis: one pass, nothing is made for an event.
 *
 * @param rest as the geocentric frame places them
 * @param speed of the frame along the axis, against it where negative
 * @param into where they are put; may not be `rest`
 * @remarks source: Einstein 1905, Ann. Phys. 17, 891, sect. 3, in units of light-time
 */
export function boostPlane(rest: Plane, { gamma, gammaBeta }: Speed, into: Plane): void {
  for (let i = 0; i < rest.count; i++) {
    const xMs = rest.xMs[i] ?? 0;
    const tMs = rest.tMs[i] ?? 0;
    into.xMs[i] = gamma * xMs - gammaBeta * tMs;
    into.tMs[i] = gamma * tMs - gammaBeta * xMs;
  }
}

/** Time from one row to another, ms: whole numbers are subtracted before anything is rounded. */
const msBetween = (events: EventColumns, from: number, to: number): number =>
  ((events.taiS[to] ?? 0) - (events.taiS[from] ?? 0)) * 1e3 + ((events.ps[to] ?? 0) - (events.ps[from] ?? 0)) / 1e9;

export const placeOf = (events: EventColumns, row: number): Vec3 => [events.xM[row] ?? 0, events.yM[row] ?? 0, events.zM[row] ?? 0];

/** Light-time between two places, ms. */
export const lightMsBetween = (a: Vec3, b: Vec3): number => (Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]) / C_M_S) * 1e3;
