import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type CandidateBrief, type CandidateInFull, type CandidateStep } from '#shared/contract/candidate-routes';
import { MOST_EVENTS_PAIRED } from '#shared/contract/pair-routes';
import { type RunningApp } from '../support/app';
import { type CandidateWorld, claimOf, type EventPair, good, makeCandidateWorld, makeIn } from '../support/candidate-world';
import { type Answer, type Client } from '../support/client';
import { eventIdsOf } from '../support/stored-example';
import { type Persona, type World } from '../support/world';

let cast: CandidateWorld;
let app: RunningApp;
let world: World;
let networkId: number;
let frameId: number;
let timelike: EventPair;
let spacelike: EventPair;
let events: readonly number[];
let analyst: Client;
let colleague: Client;

beforeAll(async () => {
  cast = await makeCandidateWorld();
  ({ app, world, networkId, frameId, timelike, spacelike, events } = cast);
  analyst = world.as('analyst');
  colleague = world.as('otherCoordinator');
});
afterAll(async () => {
  await app.close();
});

const refused = ({ status, text }: Answer, expected: number, ...words: readonly string[]): void => {
  expect(status, text).toBe(expected);
  for (const word of words) expect(text).toContain(word);
};
const make = (given: object = {}, by?: Persona): Promise<CandidateInFull> => makeIn(cast, given, by);
const read = async (id: number, by = analyst): Promise<CandidateInFull> => good(await by.get(`/candidates/${id}`));
describe('a candidate', () => {
  it('is made of single events, with what the numbers carry proposed for each pair and for the whole', async () => {
    const made = await make({ about: 'Seen by two.\nOr more.', frameIds: [frameId] });
    expect(made).toMatchObject({ state: 'draft', version: 1, about: 'Seen by two.\nOr more.', outOfDateAt: null, submittedAt: null });
    expect(made.author).toEqual({ id: world.people.analyst, name: 'Vera analyst' });
    expect(made.frames.map((frame) => frame.frameId)).toEqual([frameId]);
    expect(made.events.every(({ isIn, at }) => isIn && at !== null)).toBe(true);
    const count = made.events.length;
    const wholes = made.claims.filter(({ a }) => a === null);
    expect(wholes.map(({ kind }) => kind)).toEqual(['no-common-order']);
    expect(made.claims).toHaveLength((count * (count - 1)) / 2 + wholes.length);
    expect(new Set(made.claims.map(({ state }) => state))).toEqual(new Set(['proposed']));
    expect(claimOf(made, timelike).kind).toBe('before-in-every-frame');
    expect(claimOf(made, spacelike).kind).toBe('no-common-order');
    expect(await read(made.id)).toEqual(made);
    expect(made.moves).toEqual(['edit', 'submit', 'name-reviewers', 'comment', 'withdraw']);
    expect([made.snapshot, made.reviewers, made.signatures, made.neededSignatures]).toEqual([null, [], [], 2]);
  });

  it('is made of the events of coincidences, which it names by the hashes that they keep', async () => {
    const { db } = app.ground;
    const rule = db.$client.prepare(
      `INSERT INTO rules (network_id, code, name, is_active, created_at) VALUES (?, 'near', '', 1, '2026-01-01T00:00:00.000Z')`,
    );
    const version = db.$client.prepare(
      `INSERT INTO rule_versions (rule_id, number, minimum_fold, sigmas, window_kind, speed_c, margin_ns, created_at)
       VALUES (?, 1, 2, 3, 'light-time', 1, 0, '2026-01-01T00:00:00.000Z')`,
    );
    const coincidence = db.$client.prepare(
      `INSERT INTO coincidences (network_id, rule_version_id, set_hash, state, is_current, fold, first_tai_s, first_ps, span_ns, class, timelike_pairs,
       spacelike_pairs, undecided_pairs, nearest_margin_sigma, touches_gap, since_change, row_hash)
       VALUES (?, ?, '${'5eed'.repeat(16)}', 'open', 1, 2, ?, ?, 1, 'timelike', 1, 0, 0, 9, 0, 1, zeroblob(32))`,
    );
    const member = db.$client.prepare(
      `INSERT INTO members (coincidence_id, place, trigger_id, site_id, event_version, is_current, first_tai_s, first_ps)
       SELECT ?, ?, trigger_id, site_id, version, 1, ?, ? FROM events WHERE trigger_id = ?`,
    );
    const ruleId = rule.run(networkId).lastInsertRowid;
    const first = db.$client
      .prepare<[number], { s: number; ps: number }>('SELECT tai_s AS s, ps FROM events WHERE trigger_id = ?')
      .get(timelike[0])!;
    const id = Number(coincidence.run(networkId, version.run(ruleId).lastInsertRowid, first.s, first.ps).lastInsertRowid);
    timelike.forEach((event, at) => member.run(id, at + 1, first.s, first.ps, event));
    const made = await make({ coincidenceIds: [id], eventIds: [spacelike[0]] });
    expect(made.coincidences).toEqual([{ name: '5eed5eed5eed', setHash: '5eed'.repeat(16) }]);
    expect(new Set(made.events.map(({ eventId }) => eventId))).toEqual(new Set([...timelike, spacelike[0]]));
  });

  it('is refused of nothing, of what is not there, of another network, and of too many events', async () => {
    const path = `/networks/${networkId}/candidates`;
    refused(await analyst.post(path, { title: 'x' }), 400, 'at least one of them');
    refused(await analyst.post(path, { title: 'x', eventIds: [timelike[0], 999_999] }), 400, 'eventIds[1] is 999999');
    refused(await analyst.post(path, { title: 'x', coincidenceIds: [999_999] }), 400, 'coincidenceIds[0] is 999999');
    refused(await analyst.post(path, { title: 'x', eventIds: [timelike[0]], frameIds: [999_999] }), 400, 'frameIds[0] is 999999');
    refused(
      await analyst.post(`/networks/${world.networks.first}/candidates`, { title: 'x', eventIds: [timelike[0]] }),
      400,
      'eventIds[0]',
    );
    const { id, version } = await make({ eventIds: events });
    const more = [...eventIdsOf(app).values()][MOST_EVENTS_PAIRED]!;
    refused(await analyst.patch(`/candidates/${id}`, { events: [{ eventId: more, isIn: true, reason: '' }], version }), 409, '51 events');
  });

  it('has its events in and out with reasons, and proposes and drops claims as they go', async () => {
    const made = await make();
    const [first] = timelike;
    refused(
      await analyst.patch(`/candidates/${made.id}`, { events: [{ eventId: first, isIn: false, reason: ' ' }], version: 1 }),
      400,
      'a reason',
    );
    const accepted = good<CandidateInFull>(
      await analyst.patch(`/candidates/${made.id}/claims/${claimOf(made, timelike).id}`, { state: 'accepted', version: 1 }),
    );
    const out = good<CandidateInFull>(
      await analyst.patch(`/candidates/${made.id}`, {
        events: [{ eventId: first, isIn: false, reason: 'a door' }],
        version: accepted.version,
      }),
    );
    expect(out.events.find(({ eventId }) => eventId === first)).toMatchObject({ isIn: false, reason: 'a door' });
    expect(out.claims.filter(({ a, b }) => a === first || b === first).map(({ id, state }) => [id, state])).toEqual([
      [claimOf(made, timelike).id, 'dropped'],
    ]);
    const all = out.events.map(({ eventId }) => ({ eventId, isIn: false, reason: 'all' }));
    refused(await analyst.patch(`/candidates/${made.id}`, { events: all, version: out.version }), 409, 'at least one');
    const back = good<CandidateInFull>(
      await analyst.patch(`/candidates/${made.id}`, { events: [{ eventId: first, isIn: true, reason: '' }], version: out.version }),
    );
    expect(back.claims).toHaveLength(made.claims.length);
  });

  it('27 is not changed by who has not seen what another changed, and tells them what that was', async () => {
    const { id } = await make();
    good(await colleague.patch(`/candidates/${id}`, { title: 'Another', version: 1 }));
    const late = await analyst.patch(`/candidates/${id}`, { about: 'mine', version: 1 });
    refused(late, 409, 'version 2 (changed by Vera otherCoordinator)');
    expect((await read(id)).about).toBe('');
    const { editors } = await read(id);
    expect(editors.map((editor) => editor.id)).toEqual([world.people.analyst, world.people.otherCoordinator]);
  });

  it('29 of two changes at once takes one', async () => {
    const { id } = await make();
    const answers = await Promise.all(
      [analyst, colleague].map((client, at) => client.patch(`/candidates/${id}`, { title: `Take ${at}`, version: 1 })),
    );
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 409]);
    expect((await read(id)).version).toBe(2);
  });

  it('has a history that says who changed what', async () => {
    const made = await make();
    const claim = claimOf(made, spacelike);
    await colleague.patch(`/candidates/${made.id}`, { title: 'Renamed', frameIds: [frameId], version: 1 });
    await analyst.patch(`/candidates/${made.id}/claims/${claim.id}`, { state: 'accepted', note: 'sure', version: 2 });
    const { items } = good<{ items: CandidateStep[] }>(await analyst.get(`/candidates/${made.id}/steps?limit=2`));
    expect(items.map(({ version, action, by }) => [version, action, by?.name])).toEqual([
      [3, 'claim-decided', 'Vera analyst'],
      [2, 'changed', 'Vera otherCoordinator'],
    ]);
    expect(items[0]!.differences).toEqual([
      { where: `claims.${claim.id}.state`, before: 'proposed', after: 'accepted' },
      { where: `claims.${claim.id}.note`, before: '', after: 'sure' },
    ]);
    expect(items[1]!.differences).toEqual([
      { where: 'title', before: 'A flash and its echo', after: 'Renamed' },
      { where: 'frames', before: '', after: (await read(made.id)).frames[0]!.code },
    ]);
    const { items: rest, next } = good<{ items: CandidateStep[]; next: string | null }>(
      await analyst.get(`/candidates/${made.id}/steps?cursor=2`),
    );
    expect([rest.map(({ action }) => action), next]).toEqual([['made'], null]);
    expect(rest[0]!.differences).toContainEqual({ where: 'title', before: null, after: 'A flash and its echo' });
  });

  it('is withdrawn for good by its author or a coordinator, and by no other analyst', async () => {
    const { id } = await make();
    refused(await colleague.post(`/candidates/${id}/withdraw`, { version: 1 }), 403);
    const withdrawn = good<CandidateInFull>(await world.as('coordinator').post(`/candidates/${id}/withdraw`, { version: 1 }));
    expect([withdrawn.state, withdrawn.moves]).toEqual(['withdrawn', []]);
    refused(await analyst.patch(`/candidates/${id}`, { title: 'x', version: 2 }), 409, 'withdrawn');
    refused(await analyst.post(`/candidates/${id}/withdraw`, { version: 2 }), 409, 'withdrawn');
  });

  it('41 leaves an entry in the audit trail and a change that subscribers hear of', async () => {
    const { id } = await make();
    const { db } = app.ground;
    const entry = db.$client.prepare<[string], { action: string }>(
      `SELECT action FROM audit WHERE subject_kind = 'candidate' AND subject_id = ?`,
    );
    expect(entry.all(String(id))).toEqual([{ action: 'candidate:made' }]);
    const last = db.$client
      .prepare<[number], { kind: string; body: string }>('SELECT kind, body FROM changes WHERE network_id = ? ORDER BY number DESC LIMIT 1')
      .get(networkId)!;
    expect([last.kind, JSON.parse(last.body)]).toEqual(['candidate', { what: 'made', id }]);
  });
});

describe('a claim', () => {
  const decide = (by: Client, { id, version }: CandidateInFull, claim: number, body: object): Promise<Answer> =>
    by.patch(`/candidates/${id}/claims/${claim}`, { ...body, version });

  it('is never stronger than the numbers carry, and the refusal says why', async () => {
    const made = await make();
    const [a, b] = spacelike;
    const stronger = { state: 'weakened', as: { kind: 'before-in-every-frame', a, b, frameId: null } };
    refused(await decide(analyst, made, claimOf(made, spacelike).id, stronger), 409, 'do not carry', 'standard errors', 'spacelike');
    const reversed = { kind: 'before-in-every-frame', a: timelike[1], b: timelike[0], frameId: null, version: 1 };
    refused(await analyst.post(`/candidates/${made.id}/claims`, reversed), 409, 'do not carry');
    refused(
      await analyst.post(`/candidates/${made.id}/claims`, { ...reversed, kind: 'before-in-frame', frameId }),
      400,
      'frameId',
      'of this candidate',
    );
    expect((await read(made.id)).version).toBe(1);
  });

  it('is accepted, weakened, dropped and added, with the numbers that it states', async () => {
    const made = await make();
    const [a, b] = timelike;
    const claim = claimOf(made, timelike);
    const weaker = { state: 'weakened', as: { kind: 'before-in-frame', a, b, frameId: null }, note: 'enough' };
    const weakened = good<CandidateInFull>(await decide(analyst, made, claim.id, weaker));
    const now = weakened.claims.find(({ id }) => id === claim.id)!;
    expect(now).toMatchObject({ kind: 'before-in-frame', state: 'weakened', note: 'enough', editedBy: { id: world.people.analyst } });
    expect('dtNs' in now.numbers && now.numbers.dtNs > 0).toBe(true);
    const dropped = good<CandidateInFull>(await decide(colleague, weakened, claim.id, { state: 'dropped' }));
    expect(dropped.claims.find(({ id }) => id === claim.id)).toMatchObject({
      state: 'dropped',
      editedBy: { id: world.people.otherCoordinator },
    });
    const body = { kind: 'did-not-cause', a, b, frameId: null, version: dropped.version };
    const added = good<CandidateInFull>(await analyst.post(`/candidates/${made.id}/claims`, body), 201);
    expect(claimOf(added, timelike, 'did-not-cause').state).toBe('accepted');
    refused(await analyst.post(`/candidates/${made.id}/claims`, { ...body, version: added.version }), 409, 'says the same');
    const again = good<CandidateInFull>(await analyst.post(`/candidates/${made.id}/claims/propose`, { version: added.version }));
    expect(claimOf(again, timelike, 'before-in-every-frame').state).toBe('proposed');
    expect(claimOf(again, timelike, 'did-not-cause').state).toBe('accepted');
  });

  it('of another candidate is absent, and of no event of this one is refused', async () => {
    const [one, other] = [await make(), await make({ eventIds: [...timelike] })];
    refused(await decide(analyst, one, claimOf(other, timelike).id, { state: 'accepted' }), 404);
    const stranger = events.find((id) => !one.events.some(({ eventId }) => eventId === id))!;
    const body = { kind: 'undecided', a: timelike[0], b: stranger, frameId: null, version: one.version };
    refused(await analyst.post(`/candidates/${one.id}/claims`, body), 400, 'must be an event that counts');
  });
});

describe('the board', () => {
  const list = async (query = ''): Promise<{ items: CandidateBrief[]; next: string | null }> =>
    good(await world.as('reviewer').get(`/networks/${networkId}/candidates${query}`));

  it('has all candidates, the last touched first, from part to part', async () => {
    const { items } = await list('?limit=200');
    expect(items.length).toBeGreaterThan(8);
    const seen: number[] = [];
    for (let cursor: string | null = ''; cursor !== null;) {
      const part = await list(`?limit=3${cursor === '' ? '' : `&cursor=${cursor}`}`);
      seen.push(...part.items.map(({ id }) => id));
      cursor = part.next;
    }
    expect(seen).toEqual(items.map(({ id }) => id));
    const touched = items.map(({ updatedAt }) => updatedAt);
    expect(touched).toEqual([...touched].sort().reverse());
    expect(await list('?order=up&limit=200').then(({ items: up }) => up.map(({ id }) => id))).toEqual([...seen].reverse());
  });

  it('is kept to a state, an author, and what is out of date', async () => {
    await make({ title: 'By a colleague' }, 'otherCoordinator');
    const { items } = await list('?limit=200');
    const ids = async (query: string): Promise<number[]> => (await list(`?limit=200&${query}`)).items.map(({ id }) => id);
    const those = (is: (one: CandidateBrief) => boolean): number[] => items.filter(is).map(({ id }) => id);
    expect(await ids('state=withdrawn')).toEqual(those(({ state }) => state === 'withdrawn'));
    expect(await ids(`authorId=${world.people.otherCoordinator}`)).toEqual(
      those(({ author }) => author.id === world.people.otherCoordinator),
    );
    expect(await ids(`authorId=${world.people.analyst}&state=draft`)).toEqual(
      those(({ author, state }) => author.id === world.people.analyst && state === 'draft'),
    );
    expect(await ids('outOfDate=yes')).toEqual([]);
    expect(await ids('outOfDate=no')).toEqual(those(() => true));
    expect((await ids('state=withdrawn')).length).toBeGreaterThan(0);
  });
});
