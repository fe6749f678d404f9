import { type StoredCandidate } from '../support/stored-candidate';
import { type Persona, PERSONAS, type World } from '../support/world';
import { type Expected } from './setup-walk';

const SEE_CANDIDATES: readonly Persona[] = ['chief', 'coordinator', 'analyst', 'reviewer'];
const OUTSIDE: readonly Persona[] = ['otherCoordinator', 'nobodySpecial'];
const UNSEEN = { version: 999 };

/** What each asker may get from the routes of candidates, of a draft of the first network's analyst; of versions that nobody saw. */
export function candidateWalk(world: () => World, stored: () => StoredCandidate): Readonly<Record<string, Expected>> {
  const ofNetwork = (rest: string) => () => `/networks/${world().networks.first}${rest}`;
  const ofCandidate = (rest: string) => () => `/candidates/${stored().candidate}${rest}`;
  const read = (path: () => string): Expected => ({ in: SEE_CANDIDATES, hidden: OUTSIDE, path });
  const move = (who: readonly Persona[], path: () => string, body: object = {}): Expected => ({
    in: who,
    hidden: OUTSIDE,
    path,
    body: () => ({ ...UNSEEN, ...body }),
  });
  const whole = { kind: 'no-common-order', a: null, b: null, frameId: null };
  return {
    'GET /networks/:networkId/candidates': read(ofNetwork('/candidates')),
    'POST /networks/:networkId/candidates': {
      in: ['analyst'],
      hidden: OUTSIDE,
      path: ofNetwork('/candidates'),
      body: () => ({ title: 'walk', eventIds: [999_999] }),
    },
    'GET /candidates/:candidateId': read(ofCandidate('')),
    'GET /candidates/:candidateId/steps': read(ofCandidate('/steps')),
    'PATCH /candidates/:candidateId': move(['analyst'], ofCandidate(''), { title: 'walk' }),
    'POST /candidates/:candidateId/claims/propose': move(['analyst'], ofCandidate('/claims/propose')),
    'POST /candidates/:candidateId/claims': move(['analyst'], ofCandidate('/claims'), whole),
    'PATCH /candidates/:candidateId/claims/:claimId': move(
      ['analyst'],
      () => `/candidates/${stored().candidate}/claims/${stored().claim}`,
      {
        state: 'accepted',
      },
    ),
    'POST /candidates/:candidateId/submit': move(['analyst'], ofCandidate('/submit')),
    'GET /networks/:networkId/colleagues': read(ofNetwork('/colleagues')),
    'POST /candidates/:candidateId/reviewers': move(['chief', 'coordinator', 'analyst'], ofCandidate('/reviewers'), { personIds: [1] }),
    'POST /candidates/:candidateId/reviewers/:personId/release': move(
      ['chief', 'coordinator', 'analyst'],
      ofCandidate('/reviewers/1/release'),
    ),
    'POST /candidates/:candidateId/signatures': move(['reviewer'], ofCandidate('/signatures'), {
      ...{ snapshotSha256: '0'.repeat(64), decision: 'confirm', reason: '', password: 'whatever it is' },
      claims: [{ claim: 1, decision: 'confirm', reason: '' }],
    }),
    'POST /candidates/:candidateId/signatures/:signatureId/withdraw': move(['reviewer'], ofCandidate('/signatures/1/withdraw')),
    'GET /candidates/:candidateId/snapshots/:number': {
      in: [],
      hidden: [...SEE_CANDIDATES, ...OUTSIDE],
      path: ofCandidate('/snapshots/1'),
    },
    'GET /candidates/:candidateId/certificate': read(ofCandidate('/certificate')),
    'GET /candidates/:candidateId/comments': read(ofCandidate('/comments')),
    'POST /candidates/:candidateId/comments': {
      in: SEE_CANDIDATES,
      hidden: OUTSIDE,
      path: ofCandidate('/comments'),
      body: () => ({ body: 'walk', claimId: 999_999 }),
    },
    'PATCH /comments/:commentId': move(['analyst'], () => `/comments/${stored().comment}`, { body: 'walk' }),
    'POST /comments/:commentId/take-back': move(['analyst'], () => `/comments/${stored().comment}/take-back`),
    'GET /candidates/:candidateId/out-of-dates': read(ofCandidate('/out-of-dates')),
    'GET /me/reviews': { in: Object.keys(PERSONAS) as Persona[] },
    'POST /candidates/:candidateId/withdraw': move(['chief', 'coordinator', 'analyst'], ofCandidate('/withdraw')),
  };
}
