import { describe, expect, it } from 'vitest';
import { withLinks } from './with-links';

describe('the text of a mail', () => {
  it('has the addresses of this server as links, and of no other', () => {
    const text = 'Choose here:\n\nhttp://localhost:4210/invitation#abc\n\nnot http://localhost:4210.example/x';
    expect(withLinks(text, 'http://localhost:4210').filter(({ link }) => link)).toEqual([
      { text: 'http://localhost:4210/invitation#abc', link: true },
    ]);
    expect(withLinks(text, 'http://localhost:4210').map((piece) => piece.text).join('')).toBe(text); // prettier-ignore
  });
});
