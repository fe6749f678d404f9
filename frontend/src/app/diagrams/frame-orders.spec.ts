import { describe, expect, it } from 'vitest';
import { ranksOf, turnedWith, turningSpeedAlong } from './frame-orders';

describe('orders in frames', () => {
  it('rank the earliest first', () => expect(ranksOf([5, -1, 3])).toEqual([3, 1, 2]));

  it('say who has changed sides with whom, of pairs whose order can turn alone', () => {
    expect(turnedWith([0, 1, 2], [1, 0, -1], () => true)).toEqual([[1, 2], [0, 2], [0, 1]]); // prettier-ignore
    expect(turnedWith([0, 1, 2], [1, 0, -1], (a, b) => a + b === 1)).toEqual([[1], [0], []]);
  });

  it('do not call an order turned that is no order any more', () => expect(turnedWith([0, 1], [0, 0], () => true)).toEqual([[], []]));

  it('turn at the time over the distance, toward the later one', () => {
    expect(turningSpeedAlong(13.2, 36)).toBeCloseTo(13.2 / 36, 15);
    expect(turningSpeedAlong(13.2, -36)).toBeCloseTo(-13.2 / 36, 15);
    expect(turningSpeedAlong(36, 36)).toBeUndefined();
    expect(turningSpeedAlong(40, 36)).toBeUndefined();
  });
});
