import { C_M_S, NS_PER_LIGHT_M } from '#shared/constants';

/** Metres that light goes in a millisecond: the unit of both axes, so that light stands at 45 degrees. */
export const M_PER_LIGHT_MS = C_M_S / 1e3;

/** Milliseconds that light needs for a metre. */
export const MS_PER_LIGHT_M = NS_PER_LIGHT_M / 1e6;

export const NS_PER_MS = 1e6;
