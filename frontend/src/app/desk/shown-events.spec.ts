import { describe, expect, it } from 'vitest';
import { type EventBrief } from '#shared/contract/event-routes';
import { M_PER_LIGHT_MS } from '../diagrams/light-ms';
import { MARK_KINDS } from '../diagrams/mark-shape';
import { kindsAgainst, showEvents } from './shown-events';

const SITES = [1, 2].map((id) => ({ id, code: `S${id}`, name: '', positionSigmaM: 0 }));
const event = (id: number, siteId: number, ms: number, xMs: number, sigmaNs = 30): EventBrief => ({
  ...{ id, siteId, site: `S${siteId}`, name: `S${siteId}:${id}`, kind: 'trigger', amplitude: null, sigmaNs },
  at: { taiS: 100 + Math.floor(ms / 1000), ps: (ms - 1000 * Math.floor(ms / 1000)) * 1e9 },
  placeM: [xMs * M_PER_LIGHT_MS, 0, 0],
});

describe('events on the desk', () => {
  it('stand in time order, those of unknown sites left out', () => {
    const { briefs, columns, rowOf } = showEvents([event(5, 1, 20, 0), event(6, 2, -3, 9), event(7, 3, 1, 0)], SITES);
    expect(briefs.map(({ id }) => id)).toEqual([6, 5]);
    expect([...columns.site]).toEqual([1, 0]);
    expect(rowOf.get(5)).toBe(1);
  });

  it('are classed against one of them, before it and after it', () => {
    const events = showEvents(
      [event(1, 1, 0, 0), event(2, 2, 9, 10), event(3, 2, 11, 10), event(4, 2, -11, 10), event(5, 2, 10, 10)],
      SITES,
    );
    const kinds = kindsAgainst(events, events.rowOf.get(1) ?? -1, 3);
    const ofId = (id: number) => MARK_KINDS[kinds[events.rowOf.get(id) ?? -1] ?? 0];
    expect([1, 2, 3, 4, 5].map(ofId)).toEqual(['selected', 'spacelike', 'timelike', 'timelike', 'undecided']);
  });
});
