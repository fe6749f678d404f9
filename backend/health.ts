import { HEALTH_ROUTES } from '#shared/contract/record-routes';
import { deployment } from '#schema/schema';
import { serve, type Served } from './api/serve';
import { Refusal } from './api/refusal';
import { appliedMigrations, watchPlace, type Db } from './db';

const unavailable = (detail: string): Refusal => new Refusal(503, 'Database unavailable', detail);

/** `GET /api/health`: whether the server and its database answer, by a query that reads rows. */
export function healthRoutes(db: Db): Served[] {
  const inPlace = watchPlace(db.$client);
  return [
    serve(HEALTH_ROUTES.readHealth, {
      handle: ({ exchange: { requestId } }, { version, log }) => {
        if (!inPlace())
          throw unavailable('The database file was moved, replaced or deleted while the server ran. Put it back and restart the server.');
        try {
          const known = db.select().from(deployment).get();
          if (!known) throw new Error('the deployment has no row');
          const migrations = appliedMigrations(db.$client).length;
          return { status: 'ok' as const, version, database: 'answers' as const, migrations, deployment: { createdAt: known.createdAt } };
        } catch (fault) {
          log.error({ err: fault, requestId }, 'database failed');
          throw unavailable('The database does not answer. Ask whoever runs the server to look for this id in its log.');
        }
      },
    }),
  ];
}
