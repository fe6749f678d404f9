import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { type CandidateInFull } from '#shared/contract/candidate-routes';
import { type Comment } from '#shared/contract/comment-routes';
import { type Letter } from '../../backend/mail/letters';
import { type CandidateWorld, claimOf, good, makeCandidateWorld, makeIn } from '../support/candidate-world';
import { type Answer } from '../support/client';
import { mailedTo } from '../support/mails';
import { type Persona } from '../support/world';

let cast: CandidateWorld;
let candidate: CandidateInFull;
/** Each letter as it is posted: what is not here by the answer was not sent. */
const posted: Letter[] = [];
beforeAll(async () => {
  cast = await makeCandidateWorld();
  candidate = await makeIn(cast);
  const { post } = cast.app.ground;
  vi.spyOn(cast.app.ground, 'post').mockImplementation((letter) => {
    posted.push(letter);
    post(letter);
  });
});
afterAll(async () => {
  await cast.app.close();
});

const refused = ({ status, text }: Answer, expected: number, ...words: readonly string[]): void => {
  expect(status, text).toBe(expected);
  for (const word of words) expect(text).toContain(word);
};
const say = (by: Persona, body: object, { id } = candidate): Promise<Answer> => cast.world.as(by).post(`/candidates/${id}/comments`, body);
const person = (persona: Persona): number => cast.world.people[persona];
const toldOf = (persona: Persona): number =>
  posted.filter(({ personId, kind }) => personId === person(persona) && kind === 'mention').length;

describe('a comment', () => {
  it('is of the candidate, of a claim, of a pair, or answers another', async () => {
    const claim = claimOf(candidate, cast.timelike);
    const [a, b] = cast.spacelike;
    const whole = good<Comment>(await say('reviewer', { body: 'Which door?', isQuestion: true }), 201);
    const ofClaim = good<Comment>(await say('analyst', { body: 'Sure.\nQuite.', claimId: claim.id, answersId: whole.id }), 201);
    const ofPair = good<Comment>(await say('coordinator', { body: 'Far apart.', a, b }), 201);
    expect(whole).toMatchObject({ isQuestion: true, author: { name: 'Vera reviewer' }, claimId: null, a: null, version: 1 });
    expect(ofClaim).toMatchObject({ claimId: claim.id, answersId: whole.id, body: 'Sure.\nQuite.' });
    expect(ofPair).toMatchObject({ a, b, claimId: null });
    const { items } = good<{ items: Comment[] }>(await cast.world.as('analyst').get(`/candidates/${candidate.id}/comments`));
    expect(items).toEqual([whole, ofClaim, ofPair]);
  });

  it('is refused of what is not of the candidate, of nothing, and on what is withdrawn', async () => {
    const other = await makeIn(cast, { eventIds: [...cast.timelike] });
    refused(await say('analyst', { body: 'x', claimId: claimOf(other, cast.timelike).id }), 400, 'claimId');
    refused(await say('analyst', { body: 'x', a: cast.timelike[0], b: 999_999 }), 400, 'b is 999999');
    refused(await say('analyst', { body: 'x', a: cast.timelike[0] }), 400, 'another event');
    refused(await say('analyst', { body: 'x', answersId: 999_999 }), 400, 'answersId');
    refused(await say('analyst', { body: ' ' }), 400, 'a text of 1 to');
    good(await cast.world.as('analyst').post(`/candidates/${other.id}/withdraw`, { version: 1 }));
    refused(await say('analyst', { body: 'x' }, other), 409, 'withdrawn');
  });

  it('is edited and taken back by its author alone, who has seen it as it is', async () => {
    const { id } = good<Comment>(await say('reviewer', { body: 'First thought.' }), 201);
    refused(await cast.world.as('coordinator').patch(`/comments/${id}`, { body: 'x', version: 1 }), 403);
    const edited = good<Comment>(await cast.world.as('reviewer').patch(`/comments/${id}`, { body: 'Second thought.', version: 1 }));
    expect([edited.body, edited.version, edited.editedAt === null]).toEqual(['Second thought.', 2, false]);
    refused(await cast.world.as('reviewer').post(`/comments/${id}/take-back`, { version: 1 }), 409);
    refused(await cast.world.as('coordinator').post(`/comments/${id}/take-back`, { version: 2 }), 403);
    const back = good<Comment>(await cast.world.as('reviewer').post(`/comments/${id}/take-back`, { version: 2 }));
    expect([back.body, back.takenBackAt === null]).toEqual(['', false]);
    refused(await cast.world.as('reviewer').patch(`/comments/${id}`, { body: 'x', version: 3 }), 409, 'taken back');
  });

  it('tells whom it mentions by mail, once, unless they do not want it or wrote it', async () => {
    const named = { body: 'Look at <b>this</b>, both.', mentions: [person('reviewer'), person('analyst'), person('otherCoordinator')] };
    good(await cast.world.as('otherCoordinator').patch('/me/preferences', { mails: { mention: 'off' } }));
    const { id, mentions } = good<Comment>(await say('analyst', named), 201);
    expect(mentions.map((one) => one.id).sort((a, b) => a - b)).toEqual([...named.mentions].sort((a, b) => a - b));
    expect([toldOf('reviewer'), toldOf('analyst'), toldOf('otherCoordinator')]).toEqual([1, 0, 0]);
    const [mail] = await mailedTo(cast.app, cast.world.emailOf('reviewer'));
    expect(mail!.subject).toContain(`candidate ${candidate.number}`);
    expect(mail!.text).toContain('Vera analyst mentions you');
    expect(mail!.text).toContain('Look at <b>this</b>, both.');
    expect(posted.find(({ kind }) => kind === 'mention')!.html).toContain('Look at &lt;b&gt;this&lt;/b&gt;, both.');
    good(await cast.world.as('analyst').patch(`/comments/${id}`, { ...named, body: 'Again.', version: 1 }));
    expect(toldOf('reviewer')).toBe(1);
    refused(await say('analyst', { body: 'x', mentions: [person('operator')] }), 400, 'mentions[0]', 'sees the candidate');
  });

  it('keeps the claim that it is of, where the program proposes it no more', async () => {
    const made = await makeIn(cast);
    const claim = claimOf(made, cast.timelike);
    good(await say('reviewer', { body: 'Why?', claimId: claim.id }, made), 201);
    const out = { events: [{ eventId: cast.timelike[0], isIn: false, reason: 'a door' }], version: 1 };
    const { claims } = good<CandidateInFull>(await cast.world.as('analyst').patch(`/candidates/${made.id}`, out));
    expect(claims.find(({ id }) => id === claim.id)?.state).toBe('dropped');
  });
});
