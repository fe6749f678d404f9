import { desc, lt } from 'drizzle-orm';
import { USUAL_ITEMS } from '#shared/contract/page';
import { KEPT_MAIL_ROUTES } from '#shared/contract/record-routes';
import { DEPLOYMENT } from '#shared/contract/roles';
import { keptMails } from '#schema/schema';
import { pageFrom } from '../api/page';
import { serve, type Served } from '../api/serve';

/** `GET /api/kept-mails`: what the demo's own mail server took, newest first. */
export const keptMailRoutes = (): Served[] => [
  serve(KEPT_MAIL_ROUTES.listKeptMails, {
    placeOf: () => DEPLOYMENT,
    handle: ({ query: { cursor, limit = USUAL_ITEMS } }, { db }) =>
      pageFrom(
        db
          .select()
          .from(keptMails)
          .where(cursor === undefined ? undefined : lt(keptMails.id, cursor))
          .orderBy(desc(keptMails.id))
          .limit(limit + 1)
          .all(),
        limit,
        ({ id }) => id,
      ),
  }),
];
