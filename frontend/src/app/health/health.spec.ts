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

  it.each([
    ['ok', 'the answer is "ok"; it must be an object { }'],
    [{ ...answer, migrations: '1' }, 'migrations is "1"; it must be a whole number, 0 or more'],
    [{ ...answer, deployment: {} }, 'deployment.createdAt is missing; it must be a time in UTC, as ISO 8601'],
  ])('is refused as %j', (body, message) => {
    expect(() => readHealth(body)).toThrow(message);
  });
});

describe('a problem', () => {
  it('gives its sentence and id as far as it has them', () => {
    expect(readProblem({ detail: 'Down.', id: 'abc', status: 503 })).toEqual({ detail: 'Down.', id: 'abc' });
    expect(readProblem('<html>')).toEqual({});
    expect(readProblem({ detail: 1 })).toEqual({});
  });
});
