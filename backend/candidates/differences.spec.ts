import { describe, expect, it } from 'vitest';
import { differencesOf } from './differences';

describe('what differs between two steps', () => {
  it('is told by its path, as text, and nothing that stayed', () => {
    const before = {
      title: 'One',
      frames: ['bary', 'ship'],
      events: { 'A:1': { isIn: true, reason: '' }, 'A:2': { isIn: true, reason: '' } },
    };
    const after = {
      title: 'Two',
      frames: ['bary'],
      events: { 'A:1': { isIn: false, reason: 'noise' }, 'A:2': { isIn: true, reason: '' } },
    };
    expect(differencesOf(before, after)).toEqual([
      { where: 'title', before: 'One', after: 'Two' },
      { where: 'frames', before: 'bary, ship', after: 'bary' },
      { where: 'events.A:1.isIn', before: 'true', after: 'false' },
      { where: 'events.A:1.reason', before: '', after: 'noise' },
    ]);
    expect(differencesOf(after, after)).toEqual([]);
  });

  it('is all of what came and of what went', () => {
    expect(differencesOf({}, { claims: { 7: { kind: 'undecided', frame: null } } })).toEqual([
      { where: 'claims.7.kind', before: null, after: 'undecided' },
    ]);
    expect(differencesOf({ claims: { 7: { note: 'x' } } }, { claims: {} })).toEqual([{ where: 'claims.7.note', before: 'x', after: null }]);
  });
});
