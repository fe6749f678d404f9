import { describe, expect, it } from 'vitest';
import { emptyPlane } from './plane';
import { stepFrom } from './walk';

const plane = { ...emptyPlane(5), tMs: Float64Array.of(0, 5, 5, 9, -4) };
const places = [0, 1, 0, 2, 1];
const all = [0, 1, 2, 3, 4];

describe('a step of the keyboard', () => {
  it('begins at the latest', () => expect(stepFrom(plane, all, places, -1, 'later')).toBe(3));
  it('goes through all in time, also those of one instant, and stays at the end', () => {
    const went = [4];
    for (let i = 0; i < 5; i++) went.push(stepFrom(plane, all, places, went.at(-1) ?? 0, 'later'));
    expect(went).toEqual([4, 0, 1, 2, 3, 3]);
  });
  it('goes back the same way', () => {
    const went = [3];
    for (let i = 0; i < 5; i++) went.push(stepFrom(plane, all, places, went.at(-1) ?? 0, 'earlier'));
    expect(went).toEqual([3, 2, 1, 0, 4, 4]);
  });
  it('goes to the event of the next site that is nearest in time', () => {
    expect(stepFrom(plane, all, places, 0, 'site-after')).toBe(4);
    expect(stepFrom(plane, all, places, 3, 'site-before')).toBe(1);
    expect(stepFrom(plane, all, places, 3, 'site-after')).toBe(3);
  });
  it('leads nowhere where nothing is shown', () => expect(stepFrom(plane, [], places, 2, 'later')).toBe(-1));
});
