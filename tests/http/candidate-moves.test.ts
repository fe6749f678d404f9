import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  CANDIDATE_STATES,
  type CandidateState,
  judgeMove,
  MOVE_NAMES,
  type MoveName,
  type Relation,
} from '#shared/contract/candidate-moves';
import { type CandidateInFull } from '#shared/contract/candidate-routes';
import { candidates } from '#schema/schema';
import { type CandidateWorld, claimOf, good, makeCandidateWorld, makeIn } from '../support/candidate-world';
import { type Answer } from '../support/client';
import { PASSWORD, type Persona } from '../support/world';

/** Who they are to the candidate: its author, an analyst, one who is asked, an analyst and reviewer who is not, a reviewer who is not, a coordinator. */
const CAST: Readonly<Partial<Record<Persona, readonly Relation[]>>> = {
  analyst: ['author'],
  otherCoordinator: ['analyst'],
  reviewer: ['reviewer', 'reader'],
  otherOperator: ['analyst', 'reader'],
  nobodySpecial: ['reader'],
  coordinator: ['coordinator'],
};
const PEOPLE = Object.keys(CAST) as Persona[];
/** A version that nobody saw: what may be done is refused as stale, and nothing changes. */
const UNSEEN = { version: 999 };

let cast: CandidateWorld;
let candidate: CandidateInFull;
beforeAll(async () => {
  cast = await makeCandidateWorld();
  const analyst = cast.world.as('analyst');
  const made = await makeIn(cast, { eventIds: [...cast.timelike] });
  const claim = `/candidates/${made.id}/claims/${claimOf(made, cast.timelike).id}`;
  const { version } = good<CandidateInFull>(await analyst.patch(claim, { state: 'accepted', version: 1 }));
  const body = { personIds: [cast.world.people.reviewer], version };
  const named = good<CandidateInFull>(await analyst.post(`/candidates/${made.id}/reviewers`, body));
  candidate = good(await analyst.post(`/candidates/${made.id}/submit`, { version: named.version }));
});
afterAll(async () => {
  await cast.app.close();
});

/** A request for each move, which changes nothing whoever makes it. */
const REQUESTS: Readonly<Record<MoveName, (by: Persona) => Promise<Answer>>> = {
  edit: (by) => cast.world.as(by).patch(`/candidates/${candidate.id}`, { title: 'x', ...UNSEEN }),
  submit: (by) => cast.world.as(by).post(`/candidates/${candidate.id}/submit`, UNSEEN),
  'name-reviewers': (by) => cast.world.as(by).post(`/candidates/${candidate.id}/reviewers`, { personIds: [1], ...UNSEEN }),
  sign: (by) =>
    cast.world.as(by).post(`/candidates/${candidate.id}/signatures`, {
      ...{ snapshotSha256: candidate.snapshot!.sha256, decision: 'dispute', reason: 'no', claims: [], password: PASSWORD, ...UNSEEN },
    }),
  'withdraw-signature': (by) => cast.world.as(by).post(`/candidates/${candidate.id}/signatures/1/withdraw`, UNSEEN),
  comment: (by) => cast.world.as(by).post(`/candidates/${candidate.id}/comments`, { body: 'x', answersId: 999_999 }),
  withdraw: (by) => cast.world.as(by).post(`/candidates/${candidate.id}/withdraw`, UNSEEN),
};

/** What an answer says of whether the move may be made. */
function verdictOf({ status, text }: Answer): ReturnType<typeof judgeMove> {
  if (status === 403) return 'not-theirs';
  if (status === 409 && text.includes('this cannot be done now')) return 'not-now';
  if ((status === 409 && text.includes('after you read it')) || (status === 400 && text.includes('answersId'))) return 'allowed';
  throw new Error(`${status}: ${text}`);
}

function put(state: CandidateState, outOfDateAt: string | null): void {
  cast.app.ground.db.update(candidates).set({ state, outOfDateAt }).where(eq(candidates.id, candidate.id)).run();
}

describe('28 every move from every state by everyone', () => {
  const cells = CANDIDATE_STATES.flatMap((state) => [false, true].map((isOutOfDate) => ({ state, isOutOfDate })));
  it.each(cells)('is what the table says: $state, out of date: $isOutOfDate', async ({ state, isOutOfDate }) => {
    put(state, isOutOfDate ? '2026-01-01T00:00:00.000Z' : null);
    for (const persona of PEOPLE) {
      const relations = CAST[persona]!;
      const expected = MOVE_NAMES.map((name) => [name, judgeMove(name, { state, isOutOfDate }, relations)] as const);
      const { moves } = good<CandidateInFull>(await cast.world.as(persona).get(`/candidates/${candidate.id}`));
      expect(moves, persona).toEqual(expected.flatMap(([name, verdict]) => (verdict === 'allowed' ? [name] : [])));
      for (const [name, verdict] of expected) expect(verdictOf(await REQUESTS[name](persona)), `${name} by ${persona}`).toBe(verdict);
    }
    const { version } = good<CandidateInFull>(await cast.world.as('analyst').get(`/candidates/${candidate.id}`));
    expect(version).toBe(candidate.version);
  });
});
