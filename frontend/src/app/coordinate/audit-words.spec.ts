import { describe, expect, it } from 'vitest';
import { detailWords, subjectWords } from './audit-words';

const known = { sites: [{ id: 8, code: 'ORL' }], networks: [{ id: 1, code: 'CAIRN' }], scale: 'UTC' } as const;

describe('the details of the audit trail', () => {
  it.each([
    [{ roleId: 6, role: 'operator', siteId: 8, expiresAt: null }, 'grant no. 6, role operator, site ORL, does not expire'],
    [{ role: 'analyst', siteId: null, expiresAt: '2027-03-01T00:00:00.000Z' }, 'role analyst, expires 2027-03-01 00:00:00 UTC'],
    [{ siteId: 9 }, 'site 9'],
    [{ by: 'password', sessionsEnded: 2 }, 'by password, sessions ended 2'],
    [{ needsSecondFactor: true, staleAboveSigmas: null }, 'needs second factor yes, stale above sigmas none'],
    [{ fromTaiS: 1_772_323_237, toTaiS: null }, 'from 2026-03-01 00:00:00 UTC, to no end'],
    [{ kinds: ['a', 'b'], of: { stale: false } }, 'kinds a and b, of stale no'],
    [{}, ''],
  ])('%j are %j', (details, text) => {
    expect(detailWords({ details }, known)).toBe(text);
  });

  it('name a site and a network by their codes where they are known', () => {
    expect(subjectWords({ subjectKind: 'site', subjectId: '8' }, known)).toBe('site ORL');
    expect(subjectWords({ subjectKind: 'site', subjectId: '9' }, known)).toBe('site 9');
    expect(subjectWords({ subjectKind: 'network', subjectId: '1' }, known)).toBe('network CAIRN');
    expect(subjectWords({ subjectKind: 'time-reference', subjectId: '8' }, known)).toBe('time reference 8');
  });
});
