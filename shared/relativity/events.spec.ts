import { describe, expect, it } from 'vitest';
import { emptyEvents } from './events';

describe('emptyEvents', () => {
  it('has no events, room for those that come, and clocks that are exact until a segment is named', () => {
    const events = emptyEvents(3);
    expect(events.count).toBe(0);
    expect([...events.segment]).toEqual([-1, -1, -1]);
    const zeros = Object.entries(events).filter(([name]) => name !== 'count' && name !== 'segment');
    expect(zeros).toHaveLength(10);
    for (const [, column] of zeros) expect([...(column as Float64Array)]).toEqual([0, 0, 0]);
  });

  it('can have no room at all', () => {
    expect(emptyEvents(0).taiS).toHaveLength(0);
  });
});
