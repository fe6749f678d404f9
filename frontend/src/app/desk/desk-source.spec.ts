import { describe, expect, it } from 'vitest';
import { withRows } from './desk-source';

const row = (id: number, text = '') => ({ id, text });

describe('news put over rows', () => {
  it('adds what came, replaces what is otherwise, takes out what went', () => {
    expect(withRows([row(1), row(2), row(3)], { items: [row(4), row(2, 'new')], gone: [3] })).toEqual([row(1), row(2, 'new'), row(4)]);
  });
  it('doubles nothing when it comes twice', () => {
    const news = { items: [row(4), row(2, 'new')], gone: [3] };
    const once = withRows([row(1), row(2), row(3)], news);
    expect(withRows(once, news)).toEqual(once);
  });
});
