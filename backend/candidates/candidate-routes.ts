import { CANDIDATE_ROUTES } from '#shared/contract/candidate-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { actorOf } from '../accounts/actor';
import { pageFrom } from '../api/page';
import { personOf, serve, type Served } from '../api/serve';
import { change } from '../audit/change';
import { placeOfNetwork } from '../networks/network-rows';
import { atChange } from '../search/at-change';
import { partFrom, positionFrom, positionText } from '../search/keyset';
import { addClaim, decideClaim, proposeAnew } from './candidate-claims';
import { candidatesListed, positionOf } from './candidate-list';
import { candidateOfId } from './candidate-in-full';
import { placeOfCandidate } from './candidate-rows';
import { stepsOf } from './candidate-steps';
import { claimRow } from './claim-rows';
import { changeParts, makeCandidate } from './make-candidate';
import { moveCandidate } from './moved';

const SORT = 'touched';

/** Steps of a page: each holds the whole candidate, of many events a quarter of a megabyte. */
const MOST_STEPS = 20;

/** Candidates: listed, made, read, changed, withdrawn, and their history. */
export const candidateRoutes = (): Served[] => [
  serve(CANDIDATE_ROUTES.listCandidates, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: ({ params: { networkId }, query }, { db }) => {
      const { cursor, order = 'down', limit = USUAL_ITEMS, ...filters } = query;
      const after = cursor === undefined ? undefined : positionFrom(cursor, SORT, 2);
      return atChange(db, networkId, () =>
        partFrom(candidatesListed(db, { networkId, ...filters, order, after, limit }), limit, (row) => positionText(SORT, positionOf(row))),
      );
    },
  }),
  serve(CANDIDATE_ROUTES.makeCandidate, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: (asked, ground) => {
      const { params, body: given } = asked;
      const caller = personOf(asked);
      const actor = actorOf(asked);
      return change(ground, actor, (tx, note) => {
        const making = { tx, note, actor, nowMs: ground.nowMs() };
        const id = makeCandidate(making, ground.db, { networkId: params.networkId, authorId: caller.personId, given });
        return candidateOfId(ground.db, id, caller);
      });
    },
  }),
  serve(CANDIDATE_ROUTES.readCandidate, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: (asked, { db }) => db.transaction(() => candidateOfId(db, asked.params.candidateId, personOf(asked))),
  }),
  serve(CANDIDATE_ROUTES.changeCandidate, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: (asked, ground) => {
      const { title, about, events, frameIds } = asked.body;
      return moveCandidate(asked, ground, 'edit', ({ making, row }) => {
        changeParts(making, ground.db, row, { events, frameIds });
        return { action: 'changed', changed: { ...(title !== undefined && { title }), ...(about !== undefined && { about }) } };
      });
    },
  }),
  serve(CANDIDATE_ROUTES.proposeClaims, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: (asked, ground) =>
      moveCandidate(asked, ground, 'edit', ({ making, row }) => {
        proposeAnew(making, ground.db, row.id);
        return { action: 'claims-proposed' };
      }),
  }),
  serve(CANDIDATE_ROUTES.addClaim, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: (asked, ground) => {
      const { kind, a, b, frameId, note } = asked.body;
      return moveCandidate(asked, ground, 'edit', ({ making, row }) => {
        addClaim(making, ground.db, row.id, { kind, a, b, frameId, note });
        return { action: 'claim-added' };
      });
    },
  }),
  serve(CANDIDATE_ROUTES.decideClaim, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: (asked, ground) => {
      const { state, as, note } = asked.body;
      return moveCandidate(asked, ground, 'edit', ({ making, row }) => {
        decideClaim(making, ground.db, claimRow(making.tx, row.id, asked.params.claimId), { state, as, note });
        return { action: 'claim-decided' };
      });
    },
  }),
  serve(CANDIDATE_ROUTES.withdrawCandidate, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: (asked, ground) => moveCandidate(asked, ground, 'withdraw', () => ({ action: 'withdrawn', changed: { state: 'withdrawn' } })),
  }),
  serve(CANDIDATE_ROUTES.listCandidateSteps, {
    placeOf: ({ params: { candidateId } }, { db }) => placeOfCandidate(db, candidateId),
    handle: ({ params: { candidateId }, query: { cursor, limit = MOST_STEPS } }, { db }) => {
      const most = Math.min(limit, MOST_STEPS);
      return pageFrom(stepsOf(db, candidateId, cursor, most + 1), most, ({ version }) => version);
    },
  }),
];
