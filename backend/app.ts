import { randomUUID } from 'node:crypto';
import compression from 'compression';
import express, { type Express } from 'express';
import { type Logger } from 'pino';
import { pinoHttp } from 'pino-http';
import { myRoutes } from './accounts/my-routes';
import { preferenceRoutes } from './accounts/preference-routes';
import { peopleRoutes } from './accounts/people-routes';
import { sessionRoutes } from './accounts/session-routes';
import { siteKeyRoutes } from './accounts/site-key-routes';
import { handOverTo } from './api/hand-over';
import { registerRoutes } from './api/register';
import { type Served } from './api/serve';
import { auditRoutes } from './audit/trail';
import { candidateRoutes } from './candidates/candidate-routes';
import { commentRoutes } from './candidates/comment-routes';
import { reviewRoutes } from './candidates/review-routes';
import { clockRoutes } from './clocks/clock-routes';
import { referenceRoutes } from './clocks/reference-routes';
import { frameRoutes } from './frames/frame-routes';
import { type Ground } from './ground';
import { healthRoutes } from './health';
import { keptMailRoutes } from './mail/kept-mails';
import { networkRoutes } from './networks/network-routes';
import { runRoutes } from './networks/run-routes';
import { pageRoutes } from './pages';
import { failed, notFound } from './problem';
import { ruleRoutes } from './rules/rule-routes';
import { securityHeaders } from './security';
import { siteStateRoutes } from './live/site-state-routes';
import { siteRoutes } from './sites/site-routes';
import { tableRoutes } from './tables/table-routes';
import { coincidenceRoutes } from './coincidences/coincidence-routes';
import { eventRoutes } from './events/event-routes';
import { pairRoutes } from './pairs/pair-routes';
import { setAsideRoutes } from './set-asides/set-aside-routes';
import { streamRoutes } from './streams/stream-routes';
import { type Writer } from './writer/questions';

/** Every route of the API: what is not here is not served. */
export const allRoutes = ({ db, keepsMails }: Pick<Ground, 'db' | 'keepsMails'>): Served[] => [
  ...healthRoutes(db),
  ...sessionRoutes(),
  ...myRoutes(),
  ...preferenceRoutes(),
  ...peopleRoutes(),
  ...siteKeyRoutes(),
  ...networkRoutes(),
  ...runRoutes(),
  ...siteRoutes(),
  ...clockRoutes(),
  ...referenceRoutes(),
  ...frameRoutes(),
  ...ruleRoutes(),
  ...tableRoutes(),
  ...eventRoutes(),
  ...coincidenceRoutes(),
  ...pairRoutes(),
  ...setAsideRoutes(),
  ...candidateRoutes(),
  ...reviewRoutes(),
  ...commentRoutes(),
  ...streamRoutes(),
  ...siteStateRoutes(),
  ...auditRoutes(),
  ...(keepsMails ? keptMailRoutes() : []),
];

/**
 * The whole of HTTP: headers, the API under /api, the front end, and a problem for whatever is neither.
 *
 * @param ground what the part of the API stands on that only reads
 * @param frontend folder of the built front end
 * @param writer who answers the rest
 */
export function makeApp(ground: Ground, frontend: string, writer: Pick<Writer, 'ask'>): Express {
  const { log, production, trustedProxies } = ground;
  const app = express();
  app.set('trust proxy', trustedProxies.length > 0 ? trustedProxies : false); // whose X-Forwarded-For is read
  app.disable('x-powered-by');
  app.disable('etag'); // a page differs by its nonce, an answer is not stored; files have tags of their own
  app.use(requestLog(log));
  app.use(securityHeaders(production));
  app.use(compression());
  app.use(
    '/api',
    (_req, res, next) => {
      res.setHeader('Cache-Control', 'no-store');
      next();
    },
    registerRoutes(allRoutes(ground), ground, handOverTo(writer)),
    notFound,
  );
  app.use(pageRoutes(frontend));
  app.use(notFound);
  app.use(failed);
  return app;
}

/** One line for each request: its path without the query, and no headers, since both may carry secrets. */
function requestLog(log: Logger) {
  return pinoHttp({
    logger: log,
    genReqId: () => randomUUID(),
    customLogLevel: (_req, res, fault) => {
      if (res.statusCode === 503 && res.hasHeader('Retry-After')) return 'warn'; // busy, and soon no more
      if (fault ?? res.statusCode >= 500) return 'error';
      return res.statusCode >= 400 ? 'info' : 'debug';
    },
    wrapSerializers: false,
    serializers: {
      req: ({ id, method, url }: { id: string; method: string; url: string }) => ({ id, method, path: url.split('?', 1)[0] }),
      res: ({ statusCode }: { statusCode: number }) => ({ status: statusCode }),
    },
  });
}
