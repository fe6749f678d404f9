import { Router, type Request } from 'express';
import { policyOf } from '#shared/contract/policies';
import { sendProblem } from '../problem';
import { type Ground } from '../ground';
import { answerTo } from './answer';
import { exchangeOf, sendAnswer } from './express-exchange';
import { type HandOver } from './hand-over';
import { type Served } from './serve';

/**
 * The one way in which a route gets served.
 *
 * @param served routes with what answers them
 * @param ground what the handlers stand on that only read
 * @param handOver to where those are answered that change something
 * @throws when a route has no policy in the table, or is one of a place without saying where, or the same method and path come twice: the
 * server does not start
 */
export function registerRoutes(served: readonly Served[], ground: Ground, handOver: HandOver): Router {
  const router = Router({ caseSensitive: true, strict: true });
  const paths = new Map<string, Served[]>();
  for (const one of served) {
    refuseUndeclared(one);
    const same = paths.get(one.route.path) ?? [];
    if (same.some(({ route }) => route.method === one.route.method)) throw new Error(`${nameOf(one)} is served twice`);
    paths.set(one.route.path, [...same, one]);
  }
  // The paths without parameters first: /people/me must not be taken for the person 'me'.
  for (const [path, ways] of [...paths].sort(([a], [b]) => Number(a.includes(':')) - Number(b.includes(':'))))
    router.all(path, async (req, res) => {
      const way = ways.find(({ route }) => route.method === methodOf(req));
      if (way) {
        const exchange = exchangeOf(req, res);
        const answering = way.route.method === 'GET' ? answerTo(way, exchange, ground) : handOver(way, exchange, ground);
        sendAnswer(res, await answering);
        return;
      }
      const allowed = ways.map(({ route }) => route.method).join(', ');
      sendProblem(res, {
        status: 405,
        title: 'Not possible this way',
        detail: `It is asked for by ${allowed}.`,
        headers: { Allow: allowed },
      });
    });
  return router;
}

const nameOf = ({ route: { method, path } }: Served): string => `${method} /api${path}`;

const methodOf = ({ method }: Request): string => (method === 'HEAD' ? 'GET' : method);

function refuseUndeclared(served: Served): void {
  const { policy: name } = served.route;
  const policy = policyOf(name);
  if (!policy) throw new Error(`${nameOf(served)} has no policy: '${name}' has no line in shared/contract/policies.ts`);
  const needsPlace = policy.who === 'roles' && policy.in === 'place';
  if (needsPlace !== served.hasPlace)
    throw new Error(
      `${nameOf(served)} ${needsPlace ? 'does not say where' : 'says where'} what it asks for lies, and its policy '${name}' does ${needsPlace ? '' : 'not '}depend on that`,
    );
}
