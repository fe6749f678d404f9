import { describe, expect, it } from 'vitest';
import { fieldsOf, fieldsSent } from './fields-of';

const SENT =
  '{"series":"","sequence":"17","kind":"","reading":"2026-13-01T00:00:00","readingForm":"iso","sigmaNs":"9","amplitude":"4","extra":{"line":"x"}}';

describe('what a site sent', () => {
  it('is told by its columns, those of its own among them', () => {
    expect(fieldsSent(SENT)).toContainEqual(['reading', '2026-13-01T00:00:00']);
    expect(fieldsSent(SENT)).toContainEqual(['line', 'x']);
  });

  it('is one line where it is no record: a log line, a number, a list, nothing', () => {
    for (const verbatim of ['ORL,17,2026', '17', '[1]', '', 'null', '{"series":']) expect(fieldsSent(verbatim)).toEqual([]);
  });
});

describe('a record that is to be mended', () => {
  it('begins with what was sent, and a kind that can be chosen', () => {
    const fields = fieldsOf({ verbatim: SENT, series: '', sequence: '17' });
    expect(fields).toMatchObject({ sequence: '17', reading: '2026-13-01T00:00:00', kind: 'trigger', sigmaNs: '9' });
  });

  it('begins with number and series alone where the line cannot be read', () => {
    expect(fieldsOf({ verbatim: 'x', series: '*', sequence: null })).toMatchObject({ series: '', sequence: '', reading: '' });
    expect(fieldsOf({ verbatim: 'x', series: 'b', sequence: '4' })).toMatchObject({ series: 'b', sequence: '4' });
  });
});
