import { randomUUID } from 'node:crypto';
import { deployment } from '#schema/schema';
import { type Db } from './db';

export type Deployment = typeof deployment.$inferSelect;

/** The deployment that a database is; a new database becomes one now, by this version of the program. */
export function ensureDeployment(db: Db, version: string): Deployment {
  return db.transaction(
    (tx) => {
      const known = tx.select().from(deployment).get();
      return (
        known ??
        tx
          .insert(deployment)
          .values({ row: 1, id: randomUUID(), createdAt: new Date().toISOString(), createdWith: version })
          .returning()
          .get()
      );
    },
    { behavior: 'immediate' },
  );
}
