import { coincidenceKernel, type KernelInput } from './kernel';
import { setsFrom, type SetListener } from './sets-from';

/** Finds the coincidences of a stretch of rows: those whose earliest trigger is in [from, to). */
export type CoincidenceSweep = (from: number, to: number, listener: SetListener) => void;

/**
 * The finder over sorted columns. It walks them once, holds nothing but what surrounds the event at hand, and can be asked stretch by
 * stretch, so that a long search can pause or be cancelled.
 *
 * @param input sorted triggers, their errors, the rule and its bounds
 * @param limit an event that is the earliest of more sets than this is crowded
 * @returns the sweep; listeners hear of sets in the order of their rows
 */
export function coincidenceSweep(input: KernelInput, limit: number): CoincidenceSweep {
  const kernel = coincidenceKernel(input);
  const setsOf = setsFrom(kernel, input.events, { minimumFold: input.rule.minimumFold, limit });
  return (from, to, listener) => {
    for (let event = kernel.nextBusy(from, to); event < to; event = kernel.nextBusy(event + 1, to)) setsOf(event, listener);
  };
}
