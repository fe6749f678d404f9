import { eq } from 'drizzle-orm';
import { RUN_ROUTES } from '#shared/contract/network-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { runs } from '#schema/schema';
import { actorOf } from '../accounts/actor';
import { pageFrom } from '../api/page';
import { stale } from '../api/refusal';
import { serve, type Served } from '../api/serve';
import { change } from '../audit/change';
import { timeReader } from '../tables/times-given';
import { makeRun, spanColumns } from './make-run';
import { openNetwork, placeOfNetwork } from './network-rows';
import { noteSetup } from './note-setup';
import { placeOfRun, refuseOverlap, runOfId, runsOf } from './run-rows';

/** The data-taking periods of a network. */
export const runRoutes = (): Served[] => [
  serve(RUN_ROUTES.listRuns, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: ({ params: { networkId }, query: { cursor, limit = USUAL_ITEMS } }, { db }) =>
      pageFrom(runsOf(db, networkId, cursor, limit + 1), limit, ({ id }) => id),
  }),
  serve(RUN_ROUTES.makeRun, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: (asked, ground) => {
      const actor = actorOf(asked);
      const { code, name, from, to = null } = asked.body;
      const { read, readOrNull, warnings } = timeReader(ground.db);
      const span = { from: read(from, 'from'), to: readOrNull(to, 'to') };
      return change(ground, actor, (tx, note) => {
        const { networkId } = asked.params;
        const id = makeRun({ tx, note, actor, nowMs: ground.nowMs() }, { networkId, code, name, ...span });
        return { ...runOfId(tx, id), warnings };
      });
    },
  }),
  serve(RUN_ROUTES.changeRun, {
    placeOf: ({ params: { runId } }, { db }) => placeOfRun(db, runId),
    handle: (asked, ground) => {
      const { name, from, to, version } = asked.body;
      const { read, readOrNull, warnings } = timeReader(ground.db);
      const newFrom = from === undefined ? undefined : read(from, 'from');
      const newTo = to === undefined ? undefined : readOrNull(to, 'to');
      return change(ground, actorOf(asked), (tx, note) => {
        const before = runOfId(tx, asked.params.runId);
        const { id, networkId } = before;
        openNetwork(tx, networkId);
        if (before.version !== version) throw stale();
        const span = { from: newFrom ?? before.from, to: newTo === undefined ? before.to : newTo };
        refuseOverlap(tx, networkId, span, id);
        tx.update(runs)
          .set({ name: name ?? before.name, ...spanColumns(span), version: version + 1 })
          .where(eq(runs.id, id))
          .run();
        note({
          action: 'run:changed',
          subjectKind: 'run',
          subjectId: id,
          networkId,
          details: { fromTaiS: span.from.taiS, toTaiS: span.to?.taiS ?? null },
        });
        noteSetup(tx, networkId, { what: 'run', id }, ground.nowMs());
        return { ...runOfId(tx, id), warnings };
      });
    },
  }),
];
