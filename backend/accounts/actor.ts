import { requestIdOf } from '../api/request-id';
import { personOf, type Asked } from '../api/serve';
import { type Actor } from '../audit/change';

type AnyAsked = Asked<unknown, unknown, unknown>;

/** The person who asks, as the one who makes a change. */
export const actorOf = (asked: AnyAsked): Actor => ({ kind: 'person', id: personOf(asked).personId, requestId: requestIdOf(asked.req) });

/** A person whom a request has only just shown to be who they are. */
export const personAsActor = (personId: number, { req }: AnyAsked): Actor => ({
  kind: 'person',
  id: personId,
  requestId: requestIdOf(req),
});

/** The server itself, at a request of nobody that is known. */
export const serverAsActor = ({ req }: AnyAsked): Actor => ({ kind: 'server', id: null, requestId: requestIdOf(req) });
