import { expect, it } from 'vitest';
import { FeedLines } from './feed-lines';

it('sends a line that is no record of the site as it stands, with why', () => {
  const lines = new FeedLines('log.csv', 'ORL', () => undefined);
  const text = 'site,sequence,reading,sigma_ns\nORL,1,x,\nORL,2,x\nORL,3,x,,9\nVES,4,x,\nORL,"5" ,x,\n';
  const sent = [...lines.add(Buffer.from(text)), ...lines.end()].map(({ record: { sequence, extra } }) => [sequence, extra]);
  expect(sent).toEqual([
    ['1', undefined],
    ['', { line: 'ORL,2,x', why: 'has 3 columns; the header has 4' }],
    ['', { line: 'ORL,3,x,,9', why: 'has 5 columns; the header has 4' }],
    ['', { line: 'VES,4,x,', why: 'is of the site "VES"; the key is for ORL' }],
    ['', { line: 'ORL,"5" ,x,', why: 'has a quote that is not written as CSV has it' }],
  ]);
});
