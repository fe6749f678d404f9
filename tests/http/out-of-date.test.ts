import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import { type CandidateBrief, type CandidateInFull } from '#shared/contract/candidate-routes';
import { type OutOfDate, type SnapshotInFull } from '#shared/contract/review-routes';
import { eq } from 'drizzle-orm';
import { clockSegments, events, groundings, triggers } from '#schema/schema';
import { change } from '../../backend/audit/change';
import { editSegment } from '../../backend/clocks/make-clock';
import { type Letter } from '../../backend/mail/letters';
import { type CandidateWorld, claimOf, good, makeCandidateWorld, makeIn } from '../support/candidate-world';
import { PASSWORD, type Persona } from '../support/world';

const WAIT_MS = 20_000;
const LOOK_MS = 50;

let cast: CandidateWorld;
const posted: Letter[] = [];
beforeAll(async () => {
  cast = await makeCandidateWorld();
  vi.spyOn(cast.app.ground, 'post').mockImplementation((letter) => void posted.push(letter));
});
afterAll(async () => {
  await cast.app.close();
});

const read = async (id: number): Promise<CandidateInFull> => good(await cast.world.as('analyst').get(`/candidates/${id}`));
const person = (persona: Persona): number => cast.world.people[persona];

/** A candidate of the timelike pair in review by one reviewer, who has signed it. */
async function signed(): Promise<CandidateInFull> {
  const analyst = cast.world.as('analyst');
  const made = await makeIn(cast, { eventIds: [...cast.timelike] });
  const claim = `/candidates/${made.id}/claims/${claimOf(made, cast.timelike).id}`;
  const accepted = good<CandidateInFull>(await analyst.patch(claim, { state: 'accepted', version: 1 }));
  const body = { personIds: [person('reviewer')], version: accepted.version };
  const named = good<CandidateInFull>(await analyst.post(`/candidates/${made.id}/reviewers`, body));
  const submitted = good<CandidateInFull>(await analyst.post(`/candidates/${made.id}/submit`, { version: named.version }));
  const signature = {
    ...{ snapshotSha256: submitted.snapshot!.sha256, decision: 'confirm', reason: '', password: PASSWORD, version: submitted.version },
    claims: [{ claim: 1, decision: 'confirm', reason: '' }],
  };
  return good(await cast.world.as('reviewer').post(`/candidates/${made.id}/signatures`, signature), 201);
}

/** Looks until something is so. */
async function until<T>(look: () => Promise<T>, isSo: (value: T) => boolean): Promise<T> {
  const endMs = performance.now() + WAIT_MS;
  for (;;) {
    const value = await look();
    if (isSo(value)) return value;
    if (performance.now() > endMs) throw new Error(`it was not so within ${WAIT_MS} ms: ${JSON.stringify(value).slice(0, 300)}`);
    await new Promise((resolve) => setTimeout(resolve, LOOK_MS));
  }
}

/** States the stretch of the clock that an event rests on anew, so much further off. */
function moveClockOf(eventId: number, byNs: number): void {
  const { ground } = cast.app;
  const row = ground.db
    .select({ segment: clockSegments })
    .from(groundings)
    .innerJoin(events, eq(events.groundingId, groundings.id))
    .innerJoin(clockSegments, eq(clockSegments.id, groundings.segmentId))
    .where(eq(events.triggerId, eventId))
    .get()!.segment;
  const actor = { kind: 'server', id: null, requestId: null } as const;
  const { offsetSigmaNs, rateNsPerDay, rateSigmaNsPerDay, covarianceNs2PerDay, referenceId } = row;
  change(ground, actor, (tx, note) =>
    editSegment({ tx, note, actor, nowMs: ground.nowMs() }, row.clockId, row.segment, {
      ...{ from: { taiS: row.fromTaiS, ps: row.fromPs }, at: { taiS: row.atTaiS, ps: row.atPs }, offsetNs: row.offsetNs + byNs },
      ...{ offsetSigmaNs, rateNsPerDay, rateSigmaNsPerDay, covarianceNs2PerDay, referenceId, origin: 'certificate' },
    }),
  );
}

describe('a candidate', () => {
  it('is out of date when a clock record changes its numbers, told with the difference, and is submitted anew in one step', async () => {
    const candidate = await signed();
    const { id } = candidate;
    const [first] = cast.timelike;
    moveClockOf(first, 5_000);
    const stale = await until(
      () => read(id),
      ({ outOfDateAt }) => outOfDateAt !== null,
    );
    expect([stale.state, stale.lastStep.action, stale.lastStep.by]).toEqual(['in-review', 'out-of-date', null]);
    expect(stale.signatures).toEqual(candidate.signatures);
    expect(stale.snapshot).toEqual(candidate.snapshot);
    const { items } = good<{ items: OutOfDate[] }>(await cast.world.as('reviewer').get(`/candidates/${id}/out-of-dates`));
    expect(items.map(({ snapshot, cause }) => [snapshot, cause])).toEqual([[1, 'clock-record']]);
    const name = stale.events.find(({ eventId }) => eventId === first)!.name;
    const wheres = items[0]!.differences.map(({ where }) => where);
    expect(wheres).toContain(`${name}.at`);
    const moved = items[0]!.differences.find(({ where }) => where.endsWith('.dtNs') && !where.includes('orders'))!;
    // 5 us more of offset put the earlier event 5 us earlier: the time to the later one grows by that, to the rounding of picoseconds.
    expect(Number(moved.is) - Number(moved.was)).toBeCloseTo(5_000, 2);
    for (const persona of ['analyst', 'reviewer'] as const)
      expect(posted.filter((letter) => letter.kind === 'out-of-date' && letter.personId === person(persona))).toHaveLength(1);
    const { items: listed } = good<{ items: CandidateBrief[] }>(
      await cast.world.as('analyst').get(`/networks/${cast.networkId}/candidates?outOfDate=yes`),
    );
    expect(listed.map((one) => one.id)).toEqual([id]);
    const late = { decision: 'dispute', reason: 'late', claims: [], snapshotSha256: stale.snapshot!.sha256, password: PASSWORD };
    expect((await cast.world.as('reviewer').post(`/candidates/${id}/signatures`, { ...late, version: stale.version })).status).toBe(409);
    const again = good<CandidateInFull>(await cast.world.as('analyst').post(`/candidates/${id}/submit`, { version: stale.version }));
    expect([again.state, again.outOfDateAt, again.snapshot?.number]).toEqual(['in-review', null, 2]);
    const former = good<SnapshotInFull>(await cast.world.as('analyst').get(`/candidates/${id}/snapshots/1`));
    expect(former.sha256).toBe(candidate.snapshot!.sha256);
  });

  it('stays as it is where its numbers move by less than the bound, or are of other events', async () => {
    const { id } = await signed();
    const { db } = cast.app.ground;
    const last = db.$client.prepare<[number], number>('SELECT last FROM change_heads WHERE network_id = ?').pluck();
    const before = last.get(cast.networkId)!;
    moveClockOf(cast.timelike[0], 1e-3); // far below a tenth of a standard error
    const reprocessed = db.$client
      .prepare<[number, number], number>(`SELECT count(*) FROM changes WHERE network_id = ? AND number > ? AND kind = 'reprocessed'`)
      .pluck();
    await until(
      () => Promise.resolve(reprocessed.get(cast.networkId, before)),
      (count) => count !== 0,
    );
    await new Promise((resolve) => setTimeout(resolve, 2_500)); // the watch looks within a second
    expect((await read(id)).outOfDateAt).toBeNull();
  });

  it('is out of date when a record of it does not stand any more, and can be edited and submitted without it', async () => {
    const analyst = cast.world.as('analyst');
    const { id } = await signed();
    const [first, second] = cast.timelike;
    const row = cast.app.ground.db.select().from(triggers).where(eq(triggers.id, second)).get()!;
    const { series, sequence, kind, reading, sigma } = row;
    const other = { series, sequence, kind, reading, readingForm: 'iso', sigmaNs: sigma, amplitude: '4711' } as const;
    void cast.network.ingest.batch(row.siteId, [other]);
    const stale = await until(
      () => read(id),
      ({ outOfDateAt }) => outOfDateAt !== null,
    );
    const name = stale.events.find(({ eventId }) => eventId === second)!.name;
    const { items } = good<{ items: OutOfDate[] }>(await analyst.get(`/candidates/${id}/out-of-dates`));
    expect(items.map(({ cause, differences }) => [cause, differences])).toEqual([['conflict', [{ where: name, was: 'stands', is: null }]]]);
    const refused = await analyst.post(`/candidates/${id}/submit`, { version: stale.version });
    expect([refused.status, refused.text.includes('do not stand any more')], refused.text).toEqual([409, true]);
    const more = cast.events.find((event) => event !== first && event !== second)!;
    const events = [
      { eventId: second, isIn: false, reason: 'in conflict' },
      { eventId: more, isIn: true, reason: '' },
    ];
    const edited = good<CandidateInFull>(await analyst.patch(`/candidates/${id}`, { events, version: stale.version }));
    const proposed = edited.claims.find(({ state }) => state === 'proposed')!;
    const body = { state: 'accepted', version: edited.version };
    const accepted = good<CandidateInFull>(await analyst.patch(`/candidates/${id}/claims/${proposed.id}`, body));
    const again = good<CandidateInFull>(await analyst.post(`/candidates/${id}/submit`, { version: accepted.version }));
    expect([again.outOfDateAt, again.snapshot?.number]).toEqual([null, 2]);
  });
});
