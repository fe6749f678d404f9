import { describe, expect, it } from 'vitest';
import { healthAnswer, parseHealthAnswer } from './health';

const answer = {
  status: 'ok',
  version: '0.1.0',
  database: 'answers',
  migrations: 1,
  deployment: { createdAt: '2026-12-01T11:23:27.998Z' },
};

describe('the answer of /api/health', () => {
  it('is read', () => {
    expect(parseHealthAnswer(answer)).toMatchObject({ ok: true, value: answer });
  });

  it('may have fields that a newer server added', () => {
    expect(parseHealthAnswer({ ...answer, upS: 5 })).toMatchObject({ ok: true, value: answer });
    expect(parseHealthAnswer({ ...answer, deployment: { ...answer.deployment, name: 'x' } })).toMatchObject({ ok: true, value: answer });
  });

  it('goes out with its own fields alone', () => {
    expect(healthAnswer.safeParse(answer).success).toBe(true);
    expect(healthAnswer.safeParse({ ...answer, upS: 5 }).success).toBe(false);
    expect(healthAnswer.safeParse({ ...answer, deployment: { ...answer.deployment, name: 'x' } }).success).toBe(false);
  });

  it.each<[unknown, string, string]>([
    [null, '', 'is null; it must be an object { }'],
    ['ok', '', 'is "ok"; it must be an object { }'],
    [{ ...answer, status: 'down' }, 'status', 'is "down"; it must be one of "ok"'],
    [{ ...answer, version: 1 }, 'version', 'is 1; it must be a text'],
    [{ ...answer, database: undefined }, 'database', 'is missing; it must be one of "answers"'],
    [{ ...answer, migrations: '1' }, 'migrations', 'is "1"; it must be a whole number, 0 or more'],
    [{ ...answer, migrations: 0.5 }, 'migrations', 'is 0.5; it must be a whole number, 0 or more'],
    [{ ...answer, deployment: null }, 'deployment', 'is null; it must be an object { }'],
    [{ ...answer, deployment: { createdAt: 'today' } }, 'deployment.createdAt', 'is "today"; it must be a time in UTC, as ISO 8601'],
    [{ ...answer, deployment: {} }, 'deployment.createdAt', 'is missing; it must be a time in UTC, as ISO 8601'],
  ])('is refused as %j', (body, where, text) => {
    expect(parseHealthAnswer(body)).toEqual({ ok: false, problem: { code: 'health-form', where, text } });
  });
});
