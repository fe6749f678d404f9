import { randomUUID } from 'node:crypto';
import compression from 'compression';
import express, { type Express } from 'express';
import { type Logger } from 'pino';
import { pinoHttp } from 'pino-http';
import { type Db } from './db';
import { healthRoutes } from './health';
import { pageRoutes } from './pages';
import { failed, notFound } from './problem';
import { securityHeaders } from './security';

/** What the application needs of the process that serves it. */
export interface Surroundings {
  readonly db: Db;
  readonly log: Logger;
  readonly version: string;
  readonly production: boolean;
  /** Folder of the built front end. */
  readonly frontend: string;
}

/** The whole of HTTP: headers, the API under /api, the front end, and a problem for whatever is neither. */
export function makeApp({ db, log, version, production, frontend }: Surroundings): Express {
  const app = express();
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
    healthRoutes(db, version),
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
