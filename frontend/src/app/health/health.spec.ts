import { describe, expect, it } from 'vitest';
import { readHealth, readProblem } from './health';

const answer = {
  status: 'ok',
  version: '0.1.0',
  database: 'answers',
  migrations: 1,
  deployment: { createdAt: '2026-12-01T11:23:27.998Z' },
};

describe('the answer of /api/health', () => {
  it('is read', () => {
    expect(readHealth(answer)).toEqual({ version: '0.1.0', migrations: 1, createdAt: '2026-12-01T11:23:27.998Z' });
  });

  it.each([null, 'ok', [], {}, { ...answer, version: 1 }, { ...answer, migrations: '1' }, { ...answer, deployment: null }])(
    'is refused as %j',
    (body) => {
      expect(() => readHealth(body)).toThrow('are needed');
    },
  );
});

describe('a problem', () => {
  it('gives its sentence and id as far as it has them', () => {
    expect(readProblem({ detail: 'Down.', id: 'abc', status: 503 })).toEqual({ detail: 'Down.', id: 'abc' });
    expect(readProblem('<html>')).toEqual({});
    expect(readProblem({ detail: 1 })).toEqual({});
  });
});
