import { createHash } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type CandidateInFull, type CandidateStep } from '#shared/contract/candidate-routes';
import { type Certificate, certificate, snapshotBody } from '#shared/contract/certificate';
import { type Colleague, type ReviewAsked, type SnapshotInFull } from '#shared/contract/review-routes';
import { signatureSha256 } from '#shared/contract/signature-hash';
import { verifyCertificate } from '#shared/contract/verify-certificate';
import { canonicalJson } from '#shared/review/canonical';
import { earthBarycentricVelocityMS } from '../../backend/frames/ephemeris';
import { type CandidateWorld, claimOf, good, makeCandidateWorld, makeIn } from '../support/candidate-world';
import { type Answer } from '../support/client';
import { PASSWORD, type Persona } from '../support/world';

const MINUTE_MS = 60_000;
const sha256 = (text: string): string => createHash('sha256').update(text).digest('hex');

let cast: CandidateWorld;
beforeAll(async () => {
  cast = await makeCandidateWorld();
});
afterAll(async () => {
  await cast.app.close();
});

const refused = ({ status, text }: Answer, expected: number, ...words: readonly string[]): void => {
  expect(status, text).toBe(expected);
  for (const word of words) expect(text).toContain(word);
};
const post = (by: Persona, { id, version }: CandidateInFull, what: string, body: object = {}): Promise<Answer> =>
  cast.world.as(by).post(`/candidates/${id}/${what}`, { version, ...body });
const read = async ({ id }: CandidateInFull, by: Persona = 'analyst'): Promise<CandidateInFull> =>
  good(await cast.world.as(by).get(`/candidates/${id}`));
const person = (persona: Persona): number => cast.world.people[persona];

/** A candidate with both of its pairs claimed, before it is submitted. */
async function claimed(given: object = {}): Promise<CandidateInFull> {
  let candidate = await makeIn(cast, given);
  for (const pair of [cast.timelike, cast.spacelike])
    candidate = good(
      await cast.world
        .as('analyst')
        .patch(`/candidates/${candidate.id}/claims/${claimOf(candidate, pair).id}`, { state: 'accepted', version: candidate.version }),
    );
  return candidate;
}

/** The same in review, by two reviewers. */
async function inReview(given: object = {}): Promise<CandidateInFull> {
  const named = good<CandidateInFull>(
    await post('analyst', await claimed(given), 'reviewers', { personIds: [person('reviewer'), person('nobodySpecial')] }),
  );
  return good(await post('analyst', named, 'submit'));
}

const ALL = [1, 2].map((claim) => ({ claim, decision: 'confirm', reason: '' }));
const sign = (by: Persona, candidate: CandidateInFull, more: object = {}): Promise<Answer> =>
  post(by, candidate, 'signatures', {
    ...{ snapshotSha256: candidate.snapshot?.sha256, decision: 'confirm', reason: '', claims: ALL, password: PASSWORD },
    ...more,
  });
const dispute = { decision: 'dispute', reason: 'The clock of BRW was off.', claims: [{ claim: 1, decision: 'dispute', reason: 'off' }] };

describe('submitting', () => {
  it('freezes all that the claims rest on under one hash', async () => {
    const candidate = await inReview({ frameIds: [cast.frameId], about: 'Once.' });
    expect(candidate).toMatchObject({ state: 'in-review', snapshot: { number: 1, createdBy: { id: person('analyst') } } });
    const snapshot = good<SnapshotInFull>(await cast.world.as('reviewer').get(`/candidates/${candidate.id}/snapshots/1`));
    expect(snapshot.sha256).toBe(candidate.snapshot!.sha256);
    expect(sha256(canonicalJson(snapshot.body))).toBe(snapshot.sha256);
    expect(snapshot.body.candidate).toMatchObject({ number: candidate.number, about: 'Once.', author: 'Vera analyst' });
    expect(snapshot.body.claims.map(({ kind, state }) => [kind, state])).toEqual([
      ['before-in-every-frame', 'accepted'],
      ['no-common-order', 'accepted'],
    ]);
    const [first] = snapshot.body.inputs.records;
    const { reading } = cast.app.ground.db.$client
      .prepare<[number], { reading: string }>('SELECT reading FROM triggers WHERE id = ?')
      .get(candidate.events[0]!.eventId)!;
    expect(first!.reading).toBe(reading);
    expect(snapshot.body.results.pairs).toHaveLength((candidate.events.length * (candidate.events.length - 1)) / 2);
    expect(snapshotBody.safeParse(snapshot.body).success).toBe(true);
  });

  it('is refused where nothing is claimed, to others than the author, and of what is in review', async () => {
    const draft = await makeIn(cast);
    refused(await post('analyst', draft, 'submit'), 409, 'Nothing is claimed');
    refused(await post('otherCoordinator', await claimed(), 'submit'), 403);
    const candidate = await inReview();
    refused(await post('analyst', candidate, 'submit'), 409, 'in review');
    refused(
      await cast.world.as('analyst').patch(`/candidates/${candidate.id}`, { title: 'x', version: candidate.version }),
      409,
      'in review',
    );
  });

  it('of as many events as may be answers within seconds', async () => {
    const made = await makeIn(cast, { eventIds: cast.events });
    const accepted = good<CandidateInFull>(
      await cast.world.as('analyst').patch(`/candidates/${made.id}/claims/${made.claims[0]!.id}`, { state: 'accepted', version: 1 }),
    );
    const { snapshot } = good<CandidateInFull>(await post('analyst', accepted, 'submit'));
    expect(snapshot?.number).toBe(1);
    good(await cast.world.as('reviewer').get(`/candidates/${made.id}/certificate`));
  });
});

describe('reviewers', () => {
  it('are named by the author or a coordinator from those of the network, and released', async () => {
    const candidate = await claimed();
    const { items } = good<{ items: Colleague[] }>(await cast.world.as('analyst').get(`/networks/${cast.networkId}/colleagues`));
    const rolesOf = (persona: Persona): readonly string[] | undefined => items.find(({ id }) => id === person(persona))?.roles;
    expect([rolesOf('otherOperator'), rolesOf('chief'), rolesOf('operator')]).toEqual([
      ['analyst', 'reviewer'],
      ['coordinator'],
      undefined,
    ]);
    const reviewers = items.filter(({ roles }) => roles.includes('reviewer')).map(({ id }) => id);
    expect(reviewers).toEqual([person('reviewer'), person('otherOperator'), person('nobodySpecial')].sort((a, b) => a - b));
    refused(await post('analyst', candidate, 'reviewers', { personIds: [person('operator')] }), 400, 'personIds[0]');
    refused(await post('otherCoordinator', candidate, 'reviewers', { personIds: [person('reviewer')] }), 403);
    const named = good<CandidateInFull>(await post('coordinator', candidate, 'reviewers', { personIds: [person('reviewer')] }));
    expect(named.reviewers.map(({ id, namedBy }) => [id, namedBy.id])).toEqual([[person('reviewer'), person('coordinator')]]);
    const released = good<CandidateInFull>(await post('analyst', named, `reviewers/${person('reviewer')}/release`));
    expect(released.reviewers).toEqual([]);
    refused(await post('analyst', released, `reviewers/${person('reviewer')}/release`), 404);
  });

  it('26 are never who wrote or edited it, by any way', async () => {
    const { world } = cast;
    // Who is analyst and reviewer writes one of their own, and edits another's.
    const own = await makeIn(cast, {}, 'otherOperator');
    refused(await post('otherOperator', own, 'reviewers', { personIds: [person('otherOperator')] }), 409, 'nobody reviews their own work');
    const named = good<CandidateInFull>(
      await post('analyst', await claimed(), 'reviewers', { personIds: [person('otherOperator'), person('reviewer')] }),
    );
    const edited = good<CandidateInFull>(
      await world.as('otherOperator').patch(`/candidates/${named.id}/claims/${claimOf(named, cast.timelike).id}`, {
        ...{ state: 'accepted', note: 'mine now', version: named.version },
      }),
    );
    expect(edited.reviewers.map(({ id }) => id)).toEqual([person('reviewer')]);
    refused(await post('analyst', edited, 'reviewers', { personIds: [person('otherOperator')] }), 409, 'nobody reviews their own work');
    const submitted = good<CandidateInFull>(await post('analyst', edited, 'submit'));
    refused(await sign('otherOperator', submitted), 403);
    refused(await sign('analyst', submitted), 403);
    // Nor where the rows say that they are asked: the database holds it too.
    const { db } = cast.app.ground;
    const asked = db.$client.prepare(
      `INSERT INTO reviewers (candidate_id, person_id, named_at, named_by) VALUES (?, ?, '2026-01-01T00:00:00.000Z', ?)
       ON CONFLICT DO UPDATE SET released_at = NULL`,
    );
    asked.run(submitted.id, person('otherOperator'), person('analyst'));
    refused(await sign('otherOperator', submitted), 403);
  });
});

describe('signing', () => {
  it('confirms when all needed signatures do, and is bound to name, time and hash, one upon the other', async () => {
    const candidate = await inReview();
    const once = good<CandidateInFull>(await sign('reviewer', candidate), 201);
    expect([once.state, once.signatures.length]).toEqual(['in-review', 1]);
    const twice = good<CandidateInFull>(await sign('nobodySpecial', once, { reason: 'Looked at twice.' }), 201);
    expect(twice.state).toBe('confirmed');
    const { text } = good<{ text: string }>(await cast.world.as('coordinator').get(`/candidates/${candidate.id}/certificate`));
    const { signatures } = certificate.parse(JSON.parse(text));
    expect(signatures.map(({ name, reason, previousSha256, snapshotSha256 }) => [name, reason, previousSha256, snapshotSha256])).toEqual([
      ['Vera reviewer', '', null, candidate.snapshot!.sha256],
      ['Vera nobodySpecial', 'Looked at twice.', signatures[0]!.sha256, candidate.snapshot!.sha256],
    ]);
    for (const signature of signatures) expect(signatureSha256(signature, sha256)).toBe(signature.sha256);
    expect(twice.signatures.map((signature) => signature.sha256)).toEqual(signatures.map((signature) => signature.sha256));
  });

  it('wants the password, a reviewer who is asked, the present snapshot, and decisions that fit', async () => {
    const candidate = await inReview();
    refused(await sign('reviewer', candidate, { password: 'another gravel omelette' }), 403, 'not the password');
    refused(await sign('otherOperator', candidate), 403);
    refused(await sign('reviewer', candidate, { snapshotSha256: 'a'.repeat(64) }), 409, 'another snapshot');
    refused(await sign('reviewer', candidate, { claims: ALL.slice(1) }), 400, '1 of 2 claims');
    refused(await sign('reviewer', candidate, { claims: dispute.claims }), 400, 'where a claim is disputed');
    refused(await sign('reviewer', candidate, { claims: [...ALL, ALL[0]] }), 400, 'for the second time');
    refused(await sign('reviewer', candidate, { claims: [{ claim: 3, decision: 'confirm', reason: '' }] }), 400, 'claims 1 to 2');
    refused(await sign('reviewer', candidate, { ...dispute, reason: ' ' }), 400, 'reason');
    expect((await read(candidate)).signatures).toEqual([]);
  });

  it('disputes by one, until the author answers with a new snapshot', async () => {
    const candidate = await inReview();
    const disputed = good<CandidateInFull>(await sign('reviewer', candidate, dispute), 201);
    expect(disputed.state).toBe('disputed');
    const regretted = good<CandidateInFull>(await sign('reviewer', disputed), 201);
    expect([regretted.state, regretted.signatures[0]!.supersededById]).toEqual(['disputed', regretted.signatures[1]!.id]);
    const edited = good<CandidateInFull>(
      await cast.world.as('analyst').patch(`/candidates/${candidate.id}`, { about: 'BRW was looked at.', version: regretted.version }),
    );
    const again = good<CandidateInFull>(await post('analyst', edited, 'submit'));
    expect([again.state, again.snapshot?.number]).toEqual(['in-review', 2]);
    refused(await sign('nobodySpecial', again, { snapshotSha256: candidate.snapshot!.sha256 }), 409, 'another snapshot');
    const confirmed = good<CandidateInFull>(await sign('nobodySpecial', good(await sign('reviewer', again), 201)), 201);
    expect(confirmed.state).toBe('confirmed');
    expect(confirmed.signatures.map(({ snapshot, decision }) => [snapshot, decision])).toEqual([
      [1, 'dispute'],
      [1, 'confirm'],
      [2, 'confirm'],
      [2, 'confirm'],
    ]);
  });

  it('can be taken back for ten minutes, by who signed', async () => {
    const signed = good<CandidateInFull>(await sign('reviewer', await inReview(), dispute), 201);
    const [signature] = signed.signatures;
    refused(await post('nobodySpecial', signed, `signatures/${signature!.id}/withdraw`), 404);
    cast.app.forwardMs(9 * MINUTE_MS);
    const back = good<CandidateInFull>(await post('reviewer', signed, `signatures/${signature!.id}/withdraw`));
    expect([back.state, back.signatures[0]!.withdrawnAt === null]).toEqual(['in-review', false]);
    refused(await post('reviewer', back, `signatures/${signature!.id}/withdraw`), 409, 'does not stand');
    const anew = good<CandidateInFull>(await sign('reviewer', back), 201);
    cast.app.forwardMs(11 * MINUTE_MS);
    refused(await post('reviewer', anew, `signatures/${anew.signatures[1]!.id}/withdraw`), 409, 'ten minutes are over');
  });

  it('29 of two decisions at once takes one', async () => {
    const candidate = await inReview();
    const answers = await Promise.all([sign('reviewer', candidate), sign('nobodySpecial', candidate, dispute)]);
    expect(answers.map(({ status }) => status).sort()).toEqual([201, 409]);
    expect((await read(candidate)).signatures).toHaveLength(1);
  });

  it('27 by a reviewer who has not seen what changed meanwhile is refused', async () => {
    const candidate = await inReview();
    good(await post('coordinator', candidate, 'reviewers', { personIds: [person('otherOperator')] }));
    refused(await sign('reviewer', candidate), 409, 'reviewers-named by Vera coordinator');
  });
});

describe('a certificate', () => {
  it('holds when it is computed again from its readings, and a digit that is altered is found', async () => {
    const candidate = await inReview({ frameIds: [cast.frameId] });
    good(await sign('reviewer', candidate, { reason: 'Well.' }), 201);
    const { fileName, text } = good<{ fileName: string; text: string }>(
      await cast.world.as('analyst').get(`/candidates/${candidate.id}/certificate`),
    );
    expect(fileName).toBe(`net-${candidate.number}-1.json`);
    const checker = { sha256, earthVelocity: earthBarycentricVelocityMS, program: cast.app.ground.version };
    const findings = verifyCertificate(text, checker);
    expect(findings.ok && findings.value.filter(({ holds }) => !holds)).toEqual([]);
    const file = JSON.parse(text) as Certificate;
    const altered = { ...file, signatures: file.signatures.map((signature) => ({ ...signature, reason: 'Not well.' })) };
    const found = verifyCertificate(canonicalJson(altered), checker);
    expect(found.ok && found.value.some(({ holds }) => !holds)).toBe(true);
  });

  it('is refused of what was never submitted', async () => {
    refused(await cast.world.as('analyst').get(`/candidates/${(await makeIn(cast)).id}/certificate`), 409, 'never submitted');
  });
});

describe("a reviewer's queue", () => {
  it('says what waits for them, and since when they are asked', async () => {
    const candidate = await inReview({ title: 'To be queued' });
    const mine = async (by: Persona): Promise<ReviewAsked | undefined> =>
      good<{ items: ReviewAsked[] }>(await cast.world.as(by).get('/me/reviews?limit=200')).items.find(({ id }) => id === candidate.id);
    expect(await mine('reviewer')).toMatchObject({ title: 'To be queued', isWaiting: true, since: candidate.reviewers[0]!.namedAt });
    good(await sign('reviewer', candidate), 201);
    expect(await mine('reviewer')).toMatchObject({ isWaiting: false });
    expect(await mine('nobodySpecial')).toMatchObject({ isWaiting: true });
    expect(await mine('otherOperator')).toBeUndefined();
  });
});

describe('the history', () => {
  it('tells of submissions and signatures, by whom', async () => {
    const candidate = await inReview();
    good(await sign('reviewer', candidate, dispute), 201);
    const { items } = good<{ items: CandidateStep[] }>(await cast.world.as('analyst').get(`/candidates/${candidate.id}/steps`));
    expect(items.slice(0, 3).map(({ action, by }) => [action, by?.name])).toEqual([
      ['signed', 'Vera reviewer'],
      ['submitted', 'Vera analyst'],
      ['reviewers-named', 'Vera analyst'],
    ]);
    expect(items[0]!.differences).toContainEqual({ where: 'state', before: 'in-review', after: 'disputed' });
    expect(items[1]!.differences).toContainEqual({ where: 'state', before: 'draft', after: 'in-review' });
    expect(items[2]!.differences).toEqual([{ where: 'reviewers', before: '', after: 'Vera reviewer, Vera nobodySpecial' }]);
  });
});
