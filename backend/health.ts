import { Router } from 'express';
import { type HealthAnswer } from '#shared/contract/health';
import { deployment } from '#schema/schema';
import { appliedMigrations, watchPlace, type Db } from './db';
import { sendProblem } from './problem';

const UNAVAILABLE = 'Database unavailable';

/** `GET /api/health`: whether the server and its database answer, by a query that reads rows. */
export function healthRoutes(db: Db, version: string): Router {
  const inPlace = watchPlace(db.$client);
  return Router().get('/health', (req, res) => {
    if (!inPlace()) {
      sendProblem(
        res,
        503,
        UNAVAILABLE,
        'The database file was moved, replaced or deleted while the server ran. Put it back and restart the server.',
      );
      return;
    }
    try {
      const known = db.select().from(deployment).get();
      if (!known) throw new Error('the deployment has no row');
      const migrations = appliedMigrations(db.$client).length;
      const { createdAt } = known;
      res.json({ status: 'ok', version, database: 'answers', migrations, deployment: { createdAt } } satisfies HealthAnswer);
    } catch (fault) {
      req.log.error({ err: fault }, 'database failed');
      sendProblem(res, 503, UNAVAILABLE, 'The database does not answer. Ask whoever runs the server to look for this id in its log.');
    }
  });
}
