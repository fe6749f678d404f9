import { eq } from 'drizzle-orm';
import { CLOCK_ROUTES } from '#shared/contract/clock-routes';
import { USUAL_ITEMS } from '#shared/contract/page';
import { type TimeGiven } from '#shared/contract/setup-leaves';
import { clocks } from '#schema/schema';
import { actorOf } from '../accounts/actor';
import { pageFrom } from '../api/page';
import { stale } from '../api/refusal';
import { personOf, serve, type Asked, type Served } from '../api/serve';
import { change } from '../audit/change';
import { type Ground } from '../ground';
import { openNetwork, placeOfNetwork } from '../networks/network-rows';
import { noteSetup, type Making } from '../networks/note-setup';
import { timeReader, type TimeReader } from '../tables/times-given';
import { clockOfId, clockRow, clocksAfter, statementsOf } from './clock-rows';
import { addSegment, editSegment, endSegment, makeClock, type SegmentValues } from './make-clock';
import { placeOfClock } from './place-of-clock';

/** Clocks and their records. */
export const clockRoutes = (): Served[] => [
  serve(CLOCK_ROUTES.listClocks, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: (asked, { db }) => {
      const { networkId } = asked.params;
      const { cursor = 0, limit = USUAL_ITEMS } = asked.query;
      return pageFrom(clocksAfter(db, networkId, cursor, limit + 1, personOf(asked)), limit, ({ id }) => id);
    },
  }),
  serve(CLOCK_ROUTES.readClock, {
    placeOf: ({ params: { clockId }, caller }, { db }) => placeOfClock(db, clockId, caller),
    handle: (asked, { db }) => clockOfId(db, asked.params.clockId, personOf(asked).held),
  }),
  serve(CLOCK_ROUTES.listSegments, {
    placeOf: ({ params: { clockId }, caller }, { db }) => placeOfClock(db, clockId, caller),
    handle: ({ params: { clockId }, query: { cursor, limit = USUAL_ITEMS } }, { db }) =>
      pageFrom(statementsOf(db, clockId, cursor, limit + 1), limit, ({ id }) => id),
  }),
  serve(CLOCK_ROUTES.makeClock, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: (asked, ground) => {
      const actor = actorOf(asked);
      const { networkId } = asked.params;
      const { code, name, segments = [] } = asked.body;
      const times = timeReader(ground.db);
      const stated = segments.map((segment, at) => segmentValues(segment, times, `segments[${at}].`));
      return change(ground, actor, (tx, note) => {
        const making = { tx, note, actor, nowMs: ground.nowMs() };
        const id = makeClock(making, { networkId, code, name });
        for (const [at, values] of stated.entries()) addSegment(making, id, values, `segments[${at}].`);
        const effects = stated.length > 0 ? [] : ['The clock has no record yet: readings by it are set aside.'];
        return { ...clockOfId(tx, id, personOf(asked).held), warnings: times.warnings, effects };
      });
    },
  }),
  serve(CLOCK_ROUTES.changeClock, {
    placeOf: ({ params: { clockId }, caller }, { db }) => placeOfClock(db, clockId, caller),
    handle: (asked, ground) =>
      change(ground, actorOf(asked), (tx, note) => {
        const { clockId } = asked.params;
        const { name, version } = asked.body;
        const { networkId, ...before } = clockRow(tx, clockId);
        openNetwork(tx, networkId);
        if (before.version !== version) throw stale();
        tx.update(clocks)
          .set({ name, version: version + 1 })
          .where(eq(clocks.id, clockId))
          .run();
        note({ action: 'clock:changed', subjectKind: 'clock', subjectId: clockId, networkId });
        noteSetup(tx, networkId, { what: 'clock', id: clockId }, ground.nowMs());
        return clockOfId(tx, clockId, personOf(asked).held);
      }),
  }),
  serve(CLOCK_ROUTES.addSegment, {
    placeOf: ({ params: { clockId }, caller }, { db }) => placeOfClock(db, clockId, caller),
    handle: (asked, ground) => {
      const times = timeReader(ground.db);
      const values = segmentValues(asked.body, times, '');
      return changeRecord(asked, ground, times, (making, clockId) => addSegment(making, clockId, values));
    },
  }),
  serve(CLOCK_ROUTES.editSegment, {
    placeOf: ({ params: { clockId }, caller }, { db }) => placeOfClock(db, clockId, caller),
    handle: (asked, ground) => {
      const times = timeReader(ground.db);
      const values = segmentValues(asked.body, times, '');
      return changeRecord(asked, ground, times, (making, clockId) => editSegment(making, clockId, asked.params.segment, values));
    },
  }),
  serve(CLOCK_ROUTES.endSegment, {
    placeOf: ({ params: { clockId }, caller }, { db }) => placeOfClock(db, clockId, caller),
    handle: (asked, ground) =>
      changeRecord(asked, ground, timeReader(ground.db), (making, clockId) => endSegment(making, clockId, asked.params.segment)),
  }),
];

type RecordAsked = Asked<{ readonly clockId: number }, unknown, { readonly version: number }>;

/** A change of a record that was seen at its version. */
function changeRecord(asked: RecordAsked, ground: Ground, times: TimeReader, work: (making: Making, clockId: number) => string[]) {
  const actor = actorOf(asked);
  const { clockId } = asked.params;
  return change(ground, actor, (tx, note) => {
    if (clockRow(tx, clockId).version !== asked.body.version) throw stale();
    const effects = work({ tx, note, actor, nowMs: ground.nowMs() }, clockId);
    return { ...clockOfId(tx, clockId, personOf(asked).held), warnings: times.warnings, effects };
  });
}

type SegmentAsked = Omit<SegmentValues, 'from' | 'at'> & {
  readonly from: TimeGiven;
  readonly at?: TimeGiven | undefined;
  readonly version?: number;
};

function segmentValues({ from, at = from, version: _seen, ...values }: SegmentAsked, times: TimeReader, path: string): SegmentValues {
  return { ...values, from: times.read(from, `${path}from`), at: times.read(at, `${path}at`) };
}
