import { USUAL_ITEMS } from '#shared/contract/page';
import { DEPLOYMENT } from '#shared/contract/roles';
import { TABLE_ROUTES } from '#shared/contract/table-routes';
import { actorOf } from '../accounts/actor';
import { pageFrom } from '../api/page';
import { serve, type Asked, type Served } from '../api/serve';
import { change } from '../audit/change';
import { type Ground } from '../ground';
import { type Making } from '../networks/note-setup';
import {
  keepLeapSecondTable,
  leapSecondTableInForce,
  leapSecondTableOfId,
  leapSecondTablesBefore,
  putLeapSecondTableInForce,
} from './leap-second-tables';
import { leapSecondsInForce } from './leap-seconds-in-force';
import {
  keepOrientationTable,
  orientationTableInForce,
  orientationTableOfId,
  orientationTablesBefore,
  orientationText,
  putOrientationTableInForce,
} from './orientation-tables';
import { presentOf } from './present';
import { leapSecondWarnings, orientationWarnings } from './table-warnings';

/** The tables of time and Earth that all networks rest on. */
export const tableRoutes = (): Served[] => [
  serve(TABLE_ROUTES.readTablesInForce, {
    handle: (_asked, ground) => {
      const { db } = ground;
      const present = presentOf(ground);
      const leapSeconds = leapSecondTableInForce(db, present);
      const orientation = orientationTableInForce(db, present);
      const warnings = [...leapSecondWarnings(leapSecondsInForce(db), present), ...orientationWarnings(orientation, present)];
      return { leapSeconds, orientation, warnings };
    },
  }),
  serve(TABLE_ROUTES.listLeapSecondTables, {
    handle: ({ query: { cursor, limit = USUAL_ITEMS } }, ground) =>
      pageFrom(leapSecondTablesBefore(ground.db, cursor, limit + 1, presentOf(ground)), limit, ({ id }) => id),
  }),
  serve(TABLE_ROUTES.readLeapSecondTable, {
    handle: ({ params: { tableId } }, ground) => leapSecondTableOfId(ground.db, tableId, presentOf(ground)),
  }),
  serve(TABLE_ROUTES.uploadLeapSecondTable, {
    placeOf: () => DEPLOYMENT,
    handle: (asked, ground) =>
      withoutText(
        leapSecondTableOfId(
          ground.db,
          changed(asked, ground, (making) => keepLeapSecondTable(making, asked.body.text)),
          presentOf(ground),
        ),
      ),
  }),
  serve(TABLE_ROUTES.putLeapSecondTableInForce, {
    placeOf: () => DEPLOYMENT,
    handle: (asked, ground) => {
      const { tableId } = asked.params;
      changed(asked, ground, (making) => putLeapSecondTableInForce(making, tableId));
      return withoutText(leapSecondTableOfId(ground.db, tableId, presentOf(ground)));
    },
  }),
  serve(TABLE_ROUTES.listOrientationTables, {
    handle: ({ query: { cursor, limit = USUAL_ITEMS } }, ground) =>
      pageFrom(orientationTablesBefore(ground.db, cursor, limit + 1, presentOf(ground)), limit, ({ id }) => id),
  }),
  serve(TABLE_ROUTES.readOrientationTable, {
    handle: ({ params: { tableId } }, ground) => ({
      ...orientationTableOfId(ground.db, tableId, presentOf(ground)),
      text: orientationText(ground.db, tableId),
    }),
  }),
  serve(TABLE_ROUTES.uploadOrientationTable, {
    placeOf: () => DEPLOYMENT,
    handle: (asked, ground) =>
      orientationTableOfId(
        ground.db,
        changed(asked, ground, (making) => keepOrientationTable(making, asked.body.text)),
        presentOf(ground),
      ),
  }),
  serve(TABLE_ROUTES.putOrientationTableInForce, {
    placeOf: () => DEPLOYMENT,
    handle: (asked, ground) => {
      const { tableId } = asked.params;
      changed(asked, ground, (making) => putOrientationTableInForce(making, tableId));
      return orientationTableOfId(ground.db, tableId, presentOf(ground));
    },
  }),
];

const withoutText = <T>({ text: _text, ...table }: T & { readonly text: string }) => table;

function changed<T>(asked: Asked<unknown, unknown, unknown>, ground: Ground, work: (making: Making) => T): T {
  const actor = actorOf(asked);
  return change(ground, actor, (tx, note) => work({ tx, note, actor, nowMs: ground.nowMs() }));
}
