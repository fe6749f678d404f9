import { personOf, type Asked } from '../api/serve';
import { type Actor } from '../audit/change';

type AnyAsked = Asked<unknown, unknown, unknown>;

/** The person who asks, as the one who makes a change. */
export const actorOf = (asked: AnyAsked): Actor => ({ kind: 'person', id: personOf(asked).personId, requestId: asked.exchange.requestId });

/** A person whom a request has only just shown to be who they are. */
export const personAsActor = (personId: number, { exchange }: AnyAsked): Actor => ({
  kind: 'person',
  id: personId,
  requestId: exchange.requestId,
});

/** The server itself, at a request of nobody that is known. */
export const serverAsActor = ({ exchange }: AnyAsked): Actor => ({ kind: 'server', id: null, requestId: exchange.requestId });
