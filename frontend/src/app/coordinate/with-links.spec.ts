import { describe, expect, it } from 'vitest';
import { withLinks } from './with-links';

describe('the text of a mail', () => {
  const text = 'Choose here:\n\nhttp://localhost:4210/invitation#a-b_c\n\nnot http://localhost:4210/people';

  it('has its links as paths of the server that is open, and no other address as one', () => {
    expect(withLinks(text).filter(({ href }) => href !== undefined)).toEqual([
      { text: 'http://localhost:4210/invitation#a-b_c', href: '/invitation#a-b_c' },
    ]);
  });

  it('is whole', () => {
    expect(withLinks(text).reduce((sum, piece) => sum + piece.text, '')).toBe(text);
  });
});
