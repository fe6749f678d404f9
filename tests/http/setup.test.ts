import { and, desc, eq } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { audit, changes, networks } from '#schema/schema';
import { startApp, type RunningApp } from '../support/app';
import { type Answer } from '../support/client';
import { finalsFile } from '../support/finals';
import { LATER_EXPIRY_NTP_S, makeSetup, NEW_YEAR_TAI_S, segment, siteState, type Setup } from '../support/setup';
import { leapSecondsFile } from '../support/leap-seconds';
import { allRows } from '../support/rows';
import { makeWorld, type Persona, type World } from '../support/world';

const DAY_S = 86_400;

let app: RunningApp;
let world: World;
let setup: Setup;
beforeAll(async () => {
  app = await startApp();
  world = await makeWorld(app);
  setup = makeSetup(app, world);
});
afterAll(async () => {
  await app.close();
});

const get = async (who: Persona, path: string): Promise<Record<string, unknown>> => (await world.as(who).get(path)).body as never;

/** Of an item of a list what is looked at here. */
interface Item {
  readonly id: number;
  readonly code: string;
  readonly version: number;
  readonly number: number;
  readonly segment: number;
  readonly isInForce: boolean;
  readonly problem: string | null;
  readonly details: unknown;
  readonly position: unknown;
}
const itemsOf = async (who: Persona, path: string) => (await get(who, path))['items'] as readonly Item[];
const first = (rest = ''): string => `/networks/${world.networks.first}${rest}`;

/** The field that a refusal names, and its status. */
const refusal = ({ status, body }: Answer): [number, string | undefined] => [status, (body as { where?: string }).where];
const detailOf = ({ body }: Answer): string => (body as { detail: string }).detail;

describe('networks', () => {
  it("are listed where the asker has a role, and to the deployment's coordinator all", async () => {
    const codes = async (who: Persona) => (await itemsOf(who, '/networks')).map(({ code }) => code);
    for (const who of ['analyst', 'operator'] as const) expect(await codes(who), who).toEqual(['FIRST']);
    expect(await codes('otherCoordinator')).toEqual(['SECOND']);
    expect(await codes('nobodySpecial')).toEqual([]);
    expect(await codes('chief')).toEqual(['FIRST', 'SECOND']);
  });

  it('are made with a time as an instant or as text that says its scale, changed, and closed for good', async () => {
    const chief = world.as('chief');
    // TAI - UTC is 37 s since 2017 (IERS Bulletin C 52).
    const made = await chief.post('/networks', { code: 'THIRD', name: 'Third array', origin: '2026-01-01T00:00:00.5Z' });
    expect(made.body).toMatchObject({
      origin: { taiS: NEW_YEAR_TAI_S + 37, ps: 500_000_000_000 },
      neededSignatures: 2,
      version: 1,
      warnings: [],
    });
    const { id } = made.body as { id: number };
    const again = await chief.post('/networks', { code: 'THIRD', name: 'x', origin: { taiS: NEW_YEAR_TAI_S, ps: 0 } });
    expect(refusal(again)).toEqual([409, 'code']);
    expect((await chief.patch(`/networks/${id}`, { neededSignatures: 3, version: 1 })).body).toMatchObject({
      neededSignatures: 3,
      version: 2,
    });
    expect(refusal(await chief.patch(`/networks/${id}`, { name: 'y', version: 1 }))).toEqual([409, 'version']);
    expect((await chief.post(`/networks/${id}/close`, { version: 2 })).status).toBe(200);
    expect((await itemsOf('chief', '/networks')).map(({ code }) => code)).not.toContain('THIRD');
    for (const [path, body] of [
      [`/networks/${id}/runs`, { code: 'r', from: '2026-01-01T00:00:00Z' }],
      [`/networks/${id}/sites`, { code: 'S', state: siteState() }],
      [`/networks/${id}/clocks`, { code: 'c' }],
      [`/networks/${id}/frames`, { code: 'f', motion: { kind: 'barycentric' } }],
      [`/networks/${id}/rules`, { code: 'r', state: { window: { kind: 'light-time' } } }],
    ] as const)
      expect(detailOf(await chief.post(path, body)), path).toContain('closed');
  });

  it.each([
    ['2026-02-30T00:00:00Z', 'date does not exist'],
    ['1971-06-01T00:00:00Z', 'before 1972'],
    ['2150-01-01T00:00:00 TAI', 'from 1972 to 2099'],
    ['today', 'YYYY-MM-DDTHH:MM:SS'],
    [1_767_225_600, '"taiS"'],
    [{ taiS: 1.5, ps: 0 }, '"taiS"'],
    [{ taiS: NEW_YEAR_TAI_S, ps: 1e12 }, '"taiS"'],
    [null, '"taiS"'],
  ])('are refused with the origin %j, by field, value and what would be right', async (origin, words) => {
    const answer = await world.as('chief').post('/networks', { code: 'X', name: 'x', origin });
    expect(refusal(answer)).toEqual([400, 'origin']);
    expect(detailOf(answer)).toContain(words);
  });
});

describe('runs', () => {
  it('do not overlap: one that goes on is ended first, and both ends belong to it', async () => {
    const coordinator = world.as('coordinator');
    const at = (day: number) => ({ taiS: NEW_YEAR_TAI_S + day * DAY_S, ps: 0 });
    const later = await coordinator.post(first('/runs'), { code: 'later', from: at(10) });
    expect([later.status, detailOf(later)]).toEqual([409, expect.stringContaining('"night" goes on')]);
    const path = `/runs/${setup.runId}`;
    expect(refusal(await coordinator.patch(path, { to: at(-1), version: 1 }))).toEqual([400, 'to']);
    expect((await coordinator.patch(path, { to: at(10), version: 1 })).body).toMatchObject({ to: at(10), version: 2 });
    expect(detailOf(await coordinator.post(first('/runs'), { code: 'later', from: at(10) }))).toContain('times in common');
    const made = await coordinator.post(first('/runs'), { code: 'later', from: { ...at(10), ps: 1 }, to: at(20) });
    expect(made.status).toBe(201);
    expect(refusal(await coordinator.patch(path, { to: null, version: 1 }))).toEqual([409, 'version']);
    expect((await coordinator.patch(path, { to: null, version: 2 })).status).toBe(409);
    expect((await itemsOf('operator', first('/runs'))).map(({ code }) => code)).toEqual(['later', 'night']);
  });
});

describe('sites', () => {
  it("23 are an operator's own alone, in every list that names sites, and those of others look absent", async () => {
    const seen = await itemsOf('operator', first('/sites'));
    expect(seen.map(({ code }) => code)).toEqual(['ALPHA']);
    expect((await itemsOf('operator', first('/sites?limit=1'))).map(({ code }) => code)).toEqual(['ALPHA']);
    expect((await itemsOf('otherOperator', first('/sites?limit=1'))).map(({ code }) => code)).toEqual(['BETA']);
    expect((await itemsOf('analyst', first('/sites'))).map(({ code }) => code)).toEqual(['ALPHA', 'BETA']);
    for (const path of ['/completeness', '/site-states']) {
      const { sites } = (await get('operator', first(path))) as { sites: readonly { siteId: number }[] };
      expect(
        sites.map(({ siteId }) => siteId).filter((id) => id !== world.sites.alpha),
        path,
      ).toEqual([]);
    }
    const other = await world.as('otherOperator').get(`/sites/${world.sites.alpha}`);
    const absent = await world.as('otherOperator').get('/sites/99999');
    const body = ({ body: { id: _id, ...rest } }: { body: Record<string, unknown> }) => rest;
    expect([other.status, body(other as never)]).toEqual([absent.status, body(absent as never)]);
    expect(seen[0]).toMatchObject({ details: { clockCode: 'maser', now: { exactClock: false }, stream: { lastEvent: null } } });
  });

  it('give a place back in the other form', async () => {
    const alpha = await get('operator', `/sites/${world.sites.alpha}`);
    // By hand from the closed formula of NIMA TR8350.2, equation 4-14, with a = 6378137 m and 1/f = 298.257223563.
    const { position } = alpha['now'] as { position: { itrsM: number[]; stated: string } };
    expect(position.stated).toBe('geodetic');
    const e2 = (2 - 1 / 298.257_223_563) / 298.257_223_563;
    const rad = Math.PI / 180;
    const n = 6_378_137 / Math.sqrt(1 - e2 * Math.sin(41.2 * rad) ** 2);
    const METRE = 6; // digits behind the point: a micrometre, the accuracy that is promised
    expect(position.itrsM[0]).toBeCloseTo((n + 1680) * Math.cos(41.2 * rad) * Math.cos(-112.7 * rad), METRE);
    expect(position.itrsM[2]).toBeCloseTo((n * (1 - e2) + 1680) * Math.sin(41.2 * rad), METRE);
    const beta = await get('coordinator', `/sites/${world.sites.beta}`);
    expect(beta['now']).toMatchObject({ position: { stated: 'itrs', itrsM: [3_513_638.2, 778_956.5, 5_248_216.5] } });
  });

  it('have states that are superseded, never changed, each replaced by the one that begins with it or that names it', async () => {
    const coordinator = world.as('coordinator');
    const made = await coordinator.post(first('/sites'), { code: 'DELTA', name: 'Delta', state: siteState() });
    expect(made.status).toBe(201);
    const { id } = made.body as { id: number };
    const states = (answer: Answer) =>
      (answer.body as { versions: { number: number; supersededAt: string | null }[] }).versions.map(({ number, supersededAt }) => [
        number,
        supersededAt === null,
      ]);
    const path = `/sites/${id}/versions`;
    const corrected = await coordinator.post(path, { ...siteState({ delayNs: 400 }), version: 1 });
    expect(states(corrected)).toEqual([[2, true], [1, false]]); // prettier-ignore
    const moved = await coordinator.post(path, { ...siteState({ from: '2026-06-01T00:00:00Z' }), version: 2 });
    expect(states(moved)).toEqual([[3, true], [2, true], [1, false]]); // prettier-ignore
    const earlier = await coordinator.post(path, { ...siteState({ from: '2026-05-01T00:00:00Z' }), replaces: 3, version: 3 });
    expect(states(earlier)).toEqual([[4, true], [3, false], [2, true], [1, false]]); // prettier-ignore
    expect(refusal(await coordinator.post(path, { ...siteState(), replaces: 3, version: 4 }))).toEqual([400, 'replaces']);
    expect(detailOf(await coordinator.post(path, { ...siteState(), replaces: 4, version: 4 }))).toContain(
      'State 2 begins at the same instant',
    );
    expect(refusal(await coordinator.post(path, { ...siteState(), version: 3 }))).toEqual([409, 'version']);
    expect((await coordinator.post(`/sites/${id}/close`, { version: 4 })).status).toBe(200);
    expect((await coordinator.post(`/sites/${id}/keys`, { label: 'late' })).status).toBe(409);
    expect((await coordinator.patch(`/sites/${id}`, { name: 'Late', version: 5 })).status).toBe(409);
    expect(detailOf(await coordinator.post(path, { ...siteState(), version: 5 }))).toContain('closed');
  });

  it.each([
    [
      'state.position.geodetic.latitudeDeg',
      { position: { geodetic: { latitudeDeg: -112.7, longitudeDeg: 41.2, heightM: 0 } } },
      'longitude',
    ],
    ['state.position.geodetic.heightM', { position: { geodetic: { latitudeDeg: 4, longitudeDeg: 5, heightM: 1_680_000 } } }, 'metres'],
    ['state.position.itrsM', { position: { itrsM: [3513.6382, 778.9565, 5248.2165] } }, 'kilometres'],
    ['state.position', { position: {} }, 'either'],
    ['state.clockId', { clockId: null, exactClock: false }, 'exactClock'],
    ['state.clockId', { clockId: 99_999, exactClock: false }, 'a clock of this network'],
    ['state.delaySigmaNs', { delaySigmaNs: undefined }, 'is missing'],
    ['state.positionSigmaM', { positionSigmaM: -1 }, 'from 0'],
    ['state.scale', { scale: 'TDB' }, '"UTC"'],
    ['state.from', { from: 'soon' }, 'YYYY'],
  ])('are refused by %s with %j', async (where, more, words) => {
    const answer = await world.as('coordinator').post(first('/sites'), { code: 'BAD', state: siteState(more) });
    expect(refusal(answer)).toEqual([400, where]);
    expect(detailOf(answer)).toContain(words);
  });

  it('warn of what can be right and seldom is: a place that is one the other way round too, a height, a move', async () => {
    const coordinator = world.as('coordinator');
    const geodetic = (latitudeDeg: number, longitudeDeg: number, heightM = 100) => ({
      position: { geodetic: { latitudeDeg, longitudeDeg, heightM } },
    });
    const texts = (answer: Answer) => (answer.body as { warnings: { text: string }[] }).warnings.map(({ text }) => text).join('; ');
    const made = await coordinator.post(first('/sites'), { code: 'EPSILON', state: siteState(geodetic(47, 9)) });
    expect(texts(made)).toContain('the other way round too');
    const path = `/sites/${(made.body as { id: number }).id}/versions`;
    expect(texts(await coordinator.post(path, { ...siteState(geodetic(9, 47)), version: 1 }))).toContain('likely swapped');
    expect(texts(await coordinator.post(path, { ...siteState(geodetic(9, 48)), version: 2 }))).toMatch(/^the site moves by 110 km from/);
    expect(texts(await coordinator.post(path, { ...siteState(geodetic(9, 48.01)), version: 3 }))).toBe('');
    expect(texts(await coordinator.post(path, { ...siteState(geodetic(9, 48.01, 9_000)), version: 4 }))).toContain('9000 m above');
  });

  it('let an operator keep time by a clock of their own sites or of none, and by no other', async () => {
    const beta = world.sites.beta;
    const { version } = (await get('otherOperator', `/sites/${beta}`)) as { version: number };
    const state = (clockId: number) => ({
      ...siteState({ clockId, exactClock: false, position: { itrsM: [3_513_638.2, 778_956.5, 5_248_216.5] } }),
    });
    const stolen = await world.as('otherOperator').post(`/sites/${beta}/versions`, { ...state(setup.clockId), version });
    expect(refusal(stolen)).toEqual([400, 'clockId']);
    const otherClock = (
      (await world.as('otherCoordinator').post(`/networks/${world.networks.second}/clocks`, { code: 'elsewhere' })).body as { id: number }
    ).id;
    const own = await world.as('otherOperator').post(first('/clocks'), { code: 'beta-rb', segments: [segment()] });
    const { id } = own.body as { id: number };
    // Until a site keeps time by it, it is theirs who made it, and nobody else's but who sees all.
    expect((await world.as('otherOperator').get(`/clocks/${id}`)).status).toBe(200);
    expect((await itemsOf('otherOperator', first('/clocks'))).map(({ code }) => code)).toEqual(['beta-rb']);
    expect((await world.as('otherOperator').patch(`/clocks/${id}`, { name: 'Rubidium', version: 2 })).status).toBe(200);
    expect((await world.as('operator').get(`/clocks/${id}`)).status).toBe(404);
    expect((await world.as('operator').patch(`/clocks/${id}`, { name: 'Mine', version: 3 })).status).toBe(404);
    const alpha = (await get('operator', `/sites/${world.sites.alpha}`)) as { version: number };
    const [others, nobodys, elsewhere] = await Promise.all(
      [id, 99_999, otherClock].map((clockId) =>
        world
          .as('operator')
          .post(`/sites/${world.sites.alpha}/versions`, { ...siteState({ clockId, exactClock: false }), version: alpha.version }),
      ),
    );
    // The same words whether there is such a clock or not.
    const textOf = (answer: Answer, clockId: number) => (answer.body as { detail: string }).detail.replace(String(clockId), 'ID');
    expect(refusal(others!)).toEqual([400, 'clockId']);
    expect(textOf(nobodys!, 99_999)).toBe(textOf(others!, id));
    expect(textOf(elsewhere!, otherClock)).toBe(textOf(others!, id));
    expect((await world.as('otherOperator').post(`/sites/${beta}/versions`, { ...state(id), version })).status).toBe(201);
    expect((await world.as('otherOperator').get(`/clocks/${id}`)).status).toBe(200);
    expect((await world.as('operator').get(`/clocks/${id}`)).status).toBe(404);
    expect((await itemsOf('operator', first('/clocks'))).map(({ code }) => code)).toEqual(['maser']);
    expect((await itemsOf('analyst', first('/clocks'))).map(({ code }) => code)).toEqual(['maser', 'beta-rb']);
  });
});

describe('a clock record', () => {
  it('says what an addition, an edit and an end do to the times for which it speaks', async () => {
    const coordinator = world.as('coordinator');
    const made = await coordinator.post(first('/clocks'), { code: 'plain' });
    expect(made.body).toMatchObject({ record: [], effects: [expect.stringContaining('no record yet')] });
    const path = `/clocks/${(made.body as { id: number }).id}`;
    const effects = (answer: Answer) => (answer.body as { effects: string[] }).effects;
    expect(effects(await coordinator.post(`${path}/segments`, { ...segment(1), version: 1 }))).toEqual([
      'Segment 1 holds from 2026-01-02T00:00:00 TAI on, for good.',
      'Readings before 2026-01-02T00:00:00 TAI have no clock record and are set aside.',
    ]);
    expect(effects(await coordinator.post(`${path}/segments`, { ...segment(3), version: 2 }))).toEqual([
      'Segment 1 now holds from 2026-01-02T00:00:00 TAI until 2026-01-04T00:00:00 TAI, where segment 2 begins; it held from 2026-01-02T00:00:00 TAI on, for good.',
      'Segment 2 holds from 2026-01-04T00:00:00 TAI on, for good.',
    ]);
    const same = await coordinator.post(`${path}/segments`, { ...segment(3), version: 3 });
    expect([refusal(same), detailOf(same)]).toEqual([[400, 'from'], expect.stringContaining('segment 2')]);
    const edited = await coordinator.post(`${path}/segments/1/edit`, { ...segment(2), version: 3 });
    expect(effects(edited)).toContain('Readings before 2026-01-03T00:00:00 TAI have no clock record and are set aside.');
    expect(refusal(await coordinator.post(`${path}/segments/1/end`, { version: 3 }))).toEqual([409, 'version']);
    expect(effects(await coordinator.post(`${path}/segments/1/end`, { version: 4 }))).toEqual([
      'Segment 1 holds no more.',
      'Readings before 2026-01-04T00:00:00 TAI have no clock record and are set aside.',
    ]);
    expect((await coordinator.post(`${path}/segments/1/end`, { version: 5 })).status).toBe(404);
    expect(effects(await coordinator.post(`${path}/segments/2/end`, { version: 5 }))).toContain(
      'The clock has no record any more: readings by it are set aside.',
    );
    expect((await itemsOf('coordinator', `${path}/segments`)).map(({ segment: which, number }) => [which, number])).toEqual([[1, 2], [2, 1], [1, 1]]); // prettier-ignore
  });

  it.each([
    ['covarianceNs2PerDay', { covarianceNs2PerDay: 2.6 }, 'offsetSigmaNs x rateSigmaNsPerDay'],
    ['referenceId', { referenceId: 99_999 }, 'a time reference of this network'],
    ['origin', { origin: 'fit' }, '"certificate"'],
    ['offsetNs', { offsetNs: '5' }, 'nanoseconds'],
    ['rateSigmaNsPerDay', { rateSigmaNsPerDay: undefined }, 'is missing'],
    ['at', { at: '2026-13-01T00:00:00Z' }, 'date'],
  ])('is refused by %s with %j', async (where, more, words) => {
    const { version } = (await get('operator', `/clocks/${setup.clockId}`)) as { version: number };
    const answer = await world.as('operator').post(`/clocks/${setup.clockId}/segments`, { ...segment(30), ...more, version });
    expect(refusal(answer)).toEqual([400, where]);
    expect(detailOf(answer)).toContain(words);
  });

  it('names a reference, whose error is stated anew as another version', async () => {
    const coordinator = world.as('coordinator');
    const path = `/references/${setup.referenceId}`;
    const changed = await coordinator.patch(path, { sigmaNs: 6, note: 'recalibrated', version: 1 });
    expect(changed.body).toMatchObject({
      sigmaNs: 6,
      version: 2,
      versions: [
        { number: 2, sigmaNs: 6 },
        { number: 1, sigmaNs: 4 },
      ],
    });
    expect((await coordinator.patch(path, { name: 'Fountain', version: 2 })).body).toMatchObject({ name: 'Fountain', sigmaNs: 6 });
    expect(refusal(await coordinator.patch(path, { name: 'x', version: 2 }))).toEqual([409, 'version']);
  });
});

describe('frames', () => {
  const toward = { raDeg: 347.942, decDeg: 6.944 };
  const makeFrame = (body: object, who: Persona = 'analyst') => world.as(who).post(first('/frames'), body);

  it('tell what they move like as seen from the geocentric one, at the origin where that depends on time', async () => {
    const probe = await makeFrame({ code: 'probe', motion: { kind: 'velocity', betaC: [0.6, 0, 0] } });
    expect(probe.body).toMatchObject({
      resolved: { isConstant: true, speedC: 0.6, gamma: expect.closeTo(1.25, 12) as number, wignerDeg: 0 },
    });
    const { id } = probe.body as { id: number };
    // Two perpendicular boosts of 0.6 c: gamma is the product, 1.25^2, and tan(angle) = -(g1 g2 b1 b2) / (g1 + g2), Thomas-Wigner rotation.
    const child = await makeFrame({ code: 'child', parentId: id, motion: { kind: 'velocity', betaC: [0, 0.6, 0] } });
    const angleDeg = (Math.atan((1.25 * 0.6 * 1.25 * 0.6) / 2.5) * 180) / Math.PI;
    expect(child.body).toMatchObject({
      now: { parentId: id },
      resolved: { gamma: expect.closeTo(1.5625, 12) as number, wignerDeg: expect.closeTo(angleDeg, 9) as number },
    });
    const cmb = await makeFrame({ code: 'cmb', parentId: setup.frameId, motion: { kind: 'velocity', speedKmS: 369.82, toward } });
    expect(cmb.body).toMatchObject({ now: { motion: { kind: 'velocity', speedKmS: 369.82, toward } }, resolved: { isConstant: false } });
    const along = { kind: 'toward-baseline', rapidity: 0.7, fromSiteId: world.sites.alpha, toSiteId: world.sites.beta };
    const baseline = await makeFrame({ code: 'along', motion: along });
    expect(baseline.body).toMatchObject({
      now: { motion: along },
      resolved: { isConstant: false, rapidity: expect.closeTo(0.7, 12) as number },
    });
    expect((await makeFrame({ code: 'fixed', at: 'origin', motion: along })).body).toMatchObject({ resolved: { isConstant: true } });
    expect((await itemsOf('operator', first('/frames'))).map(({ code, problem }) => [code, problem])).toEqual(
      ['bary', 'probe', 'child', 'cmb', 'along', 'fixed'].map((code) => [code, null]),
    );
  });

  it('go up to the geocentric one and never round in a circle', async () => {
    const frames = await itemsOf('analyst', first('/frames'));
    const { id, version } = frames.find(({ code }) => code === 'probe')!;
    const { id: childId } = frames.find(({ code }) => code === 'child')!;
    const circle = await world.as('analyst').patch(`/frames/${id}`, { parentId: childId, version });
    expect([refusal(circle), detailOf(circle)]).toEqual([[400, 'parentId'], expect.stringContaining('circle')]);
    expect((await world.as('analyst').patch(`/frames/${id}`, { parentId: id, version })).status).toBe(400);
    expect((await get('analyst', `/frames/${id}`))['version']).toBe(version); // nothing of it was kept
    expect(detailOf(await world.as('analyst').post(`/frames/${id}/close`, { version }))).toContain('"child" moves in this one');
  });

  it('are stated anew as another version', async () => {
    const frames = await itemsOf('analyst', first('/frames'));
    const { id, version } = frames.find(({ code }) => code === 'fixed')!;
    const path = `/frames/${id}`;
    const changed = await world.as('analyst').patch(path, { motion: { kind: 'velocity', speedC: 0.8, toward }, pinned: 1, version });
    expect(changed.body).toMatchObject({
      pinned: 1,
      now: { number: 2, at: 'origin' },
      versions: [{ number: 2 }, { number: 1 }],
      resolved: { speedC: expect.closeTo(0.8, 14) as number },
    });
    expect(refusal(await world.as('analyst').patch(path, { name: 'x', version }))).toEqual([409, 'version']);
    expect((await world.as('analyst').post(`${path}/close`, { version: version + 1 })).body).toMatchObject({ pinned: null });
    expect((await itemsOf('analyst', first('/frames'))).map(({ code }) => code)).not.toContain('fixed');
  });

  it.each([
    ['code', { code: 'geocentric', motion: { kind: 'barycentric' } }],
    ['motion.kind', { code: 'f', motion: { kind: 'spinning' } }],
    ['motion.speedC', { code: 'f', motion: { kind: 'velocity', speedC: 1, toward } }],
    ['motion.betaC', { code: 'f', motion: { kind: 'velocity', betaC: [0.8, 0.8, 0] } }],
    ['motion.rapidity', { code: 'f', motion: { kind: 'velocity', rapidity: 301, toward } }],
    ['motion', { code: 'f', motion: { kind: 'velocity', speedC: 0.1, speedKmS: 1, toward } }],
    ['motion', { code: 'f', motion: { kind: 'velocity', speedC: 0.1 } }],
    ['motion.toSiteId', { code: 'f', motion: { kind: 'toward-baseline', speedC: 0.1, fromSiteId: 1, toSiteId: 1 } }],
    ['motion.toSiteId', { code: 'f', motion: { kind: 'toward-baseline', speedC: 0.1, fromSiteId: 1, toSiteId: 3 } }], // of another network
    ['parentId', { code: 'f', parentId: 99_999, motion: { kind: 'velocity', speedC: 0.1, toward } }],
    ['parentId', { code: 'f', parentId: 1, motion: { kind: 'barycentric' } }],
  ])('are refused by %s: %j', async (where, body) => {
    const answer = await makeFrame(body);
    const [status, field] = refusal(answer);
    expect([status, field], detailOf(answer)).toEqual([400, where]);
  });

  it('are refused along a baseline that has no length', async () => {
    const here = { position: { itrsM: [3_513_638.2, 778_956.5, 5_248_216.5] } };
    const { id } = (await world.as('coordinator').post(first('/sites'), { code: 'SAME', state: siteState(here) })).body as { id: number };
    const answer = await makeFrame({
      code: 'none',
      motion: { kind: 'toward-baseline', speedC: 0.1, fromSiteId: world.sites.beta, toSiteId: id },
    });
    expect([refusal(answer), detailOf(answer)]).toEqual([[400, 'motion'], expect.stringContaining('at one place')]);
  });
});

describe('rules', () => {
  it('are stated, activated and stated anew, whole, with sites and exclusions', async () => {
    const analyst = world.as('analyst');
    const made = await analyst.post(first('/rules'), {
      code: 'fixed-100',
      state: {
        window: { kind: 'fixed', widthNs: 1e5, frameId: setup.frameId },
        minimumFold: 2,
        siteIds: [world.sites.alpha, world.sites.beta],
      },
    });
    expect(made.body).toMatchObject({
      isActive: false,
      now: { number: 1, sigmas: 3, window: { kind: 'fixed', widthNs: 1e5, frameId: setup.frameId } },
    });
    const path = `/rules/${(made.body as { id: number }).id}`;
    expect((await analyst.post(`${path}/activate`, { version: 1 })).body).toMatchObject({ isActive: true, version: 2 });
    expect((await analyst.post(`${path}/activate`, { version: 2 })).status).toBe(409);
    const exclusions = [{ siteId: null, from: '2026-01-02T00:00:00Z', to: '2026-01-02T01:00:00Z', reason: 'calibration' }];
    const changed = await analyst.patch(path, { state: { window: { kind: 'light-time' }, exclusions }, version: 2 });
    expect(changed.body).toMatchObject({
      isActive: true,
      now: {
        number: 2,
        siteIds: [],
        window: { kind: 'light-time', speedC: 1, marginNs: 0 },
        exclusions: [{ siteId: null, from: { taiS: NEW_YEAR_TAI_S + DAY_S + 37, ps: 0 }, reason: 'calibration' }],
      },
    });
    expect((await analyst.post(`${path}/deactivate`, { version: 3 })).body).toMatchObject({ isActive: false });
    expect(refusal(await analyst.patch(path, { name: 'x', version: 3 }))).toEqual([409, 'version']);
    expect((await itemsOf('reviewer', `${path}/versions`)).map(({ number }) => number)).toEqual([2, 1]);
    const told = app.ground.db
      .select()
      .from(changes)
      .where(eq(changes.networkId, world.networks.first))
      .orderBy(desc(changes.number))
      .limit(3)
      .all();
    expect(told.map(({ kind }) => kind)).toEqual(['rule', 'rule', 'rule']);
  });

  it.each([
    ['state.minimumFold', { minimumFold: 1, window: { kind: 'light-time' } }],
    ['state.window.speedC', { window: { kind: 'light-time', speedC: 0 } }],
    ['state.window.widthNs', { window: { kind: 'fixed', widthNs: -1 } }],
    ['state.window.frameId', { window: { kind: 'fixed', widthNs: 1, frameId: 99_999 } }],
    ['state.siteIds[1]', { window: { kind: 'light-time' }, siteIds: [1, 1] }],
    ['state.siteIds[0]', { window: { kind: 'light-time' }, siteIds: [3, 1] }], // of another network
    ['state.siteIds', { window: { kind: 'light-time' }, siteIds: [1] }],
    [
      'state.exclusions[0].to',
      {
        window: { kind: 'light-time' },
        exclusions: [{ siteId: null, from: '2026-01-02T00:00:00Z', to: '2026-01-01T00:00:00Z', reason: '' }],
      },
    ],
    [
      'state.exclusions[0].siteId',
      { window: { kind: 'light-time' }, exclusions: [{ siteId: 3, from: '2026-01-01T00:00:00Z', to: '2026-01-02T00:00:00Z', reason: '' }] },
    ],
    ['state.crowdLimit', { window: { kind: 'light-time' }, crowdLimit: 10_001 }],
  ])('are refused by %s: %j', async (where, state) => {
    expect(refusal(await world.as('analyst').post(first('/rules'), { code: 'bad', state }))).toEqual([400, where]);
  });
});

describe('tables of time and Earth', () => {
  it('take a leap-second list that goes on from the one in force, and none that changes the past', async () => {
    const chief = world.as('chief');
    const upload = (text: string) => chief.post('/leap-second-tables', { text });
    const good = leapSecondsFile({ expiresNtpS: LATER_EXPIRY_NTP_S + DAY_S });
    expect(detailOf(await upload(good.replace(/^#h.*$/m, '#h 1 2 3 4 5')))).toContain('damaged');
    expect(detailOf(await upload('2272060800 10'))).toContain('without its line');
    expect(detailOf(await upload(leapSecondsFile({ expiresNtpS: LATER_EXPIRY_NTP_S, fewer: 1 })))).toContain('row 28 differs');
    expect(detailOf(await upload(leapSecondsFile({ expiresNtpS: 3_900_000_000 })))).toContain('expires earlier');
    // 2027-01-01 lies before the expiry of the shipped list (2027-06-28), 2027-07-01 after it; NTP seconds.
    expect(detailOf(await upload(leapSecondsFile({ expiresNtpS: LATER_EXPIRY_NTP_S, more: [[4_007_750_400, 38]] })))).toContain(
      'before the list in force expires',
    );
    const step = await upload(leapSecondsFile({ expiresNtpS: LATER_EXPIRY_NTP_S, more: [[4_023_388_800, 38]] }));
    expect(step.body).toMatchObject({ steps: 29, taiMinusUtcS: 38, isInForce: false });
    const kept = await upload(good);
    expect(kept.body).toMatchObject({ steps: 28, taiMinusUtcS: 37, isInForce: false });
    expect((await upload(good)).status).toBe(409);
    const { id } = kept.body as { id: number };
    expect((await chief.post(`/leap-second-tables/${id}/put-in-force`)).body).toMatchObject({ isInForce: true });
    expect((await chief.post(`/leap-second-tables/${id}/put-in-force`)).status).toBe(409);
    expect(await get('nobodySpecial', `/leap-second-tables/${id}`)).toMatchObject({ text: good });
    expect(detailOf(await chief.post(`/leap-second-tables/${(step.body as { id: number }).id}/put-in-force`))).toContain('expires earlier');
    for (const networkId of [world.networks.first, world.networks.second])
      expect(
        app.ground.db
          .select()
          .from(changes)
          .where(and(eq(changes.networkId, networkId), eq(changes.kind, 'setup'))) // what is computed anew after it comes in its own time
          .orderBy(desc(changes.number))
          .get(),
      ).toMatchObject({
        body: JSON.stringify({ what: 'leap-second-table', id }),
      });
  });

  it('warn from 30 days before a list expires, and when it has; and that there is no Earth-orientation table', async () => {
    const other = await startApp();
    try {
      const there = await makeWorld(other);
      const warnings = async () =>
        ((await there.as('operator').get('/tables-in-force')).body as { warnings: { text: string }[] }).warnings.map(({ text }) => text);
      const daysLeft = Math.floor((Date.parse('2027-06-28') - other.ground.nowMs()) / (DAY_S * 1000));
      expect(await warnings()).toEqual([expect.stringContaining('no Earth-orientation table')]);
      other.forwardMs((daysLeft - 20) * DAY_S * 1000);
      expect((await warnings())[0]).toMatch(/expires on 2027-06-28, in (20|21) days/);
      other.forwardMs(30 * DAY_S * 1000);
      expect((await warnings())[0]).toContain('expired on 2027-06-28');
    } finally {
      await other.close();
    }
  });

  it('take an Earth-orientation table whose days and values can be', async () => {
    const chief = world.as('chief');
    const upload = (text: string) => chief.post('/orientation-tables', { text });
    expect(detailOf(await upload('nothing'))).toContain('line 1');
    const text = finalsFile('2026-02-01', 20, 10);
    expect(detailOf(await upload(text.split('\n').toSpliced(3, 1).join('\n')))).toContain('each day once');
    const kept = await upload(text);
    // MJD 61072 is 2026-02-01 (40587 is 1970-01-01).
    expect(kept.body).toMatchObject({ firstMjd: 61_072, lastMjd: 61_101, predictedFromMjd: 61_092, isInForce: false });
    const { id } = kept.body as { id: number };
    expect((await upload(text)).status).toBe(409);
    expect((await chief.post(`/orientation-tables/${id}/put-in-force`)).body).toMatchObject({ isInForce: true });
    expect(await get('analyst', `/orientation-tables/${id}`)).toMatchObject({ text });
    expect(await get('analyst', '/tables-in-force')).toMatchObject({ orientation: { id } });
    expect((await itemsOf('analyst', '/orientation-tables')).map(({ isInForce }) => isInForce)).toEqual([true, false]);
  });
});

describe('frames in the tables', () => {
  it('have each a place of their own', async () => {
    const coordinator = world.as('coordinator');
    const make = (code: string, pinned: number) => coordinator.post(first('/frames'), { code, pinned, motion: { kind: 'barycentric' } });
    const one = (await make('pin1', 8)).body as { id: number; version: number };
    expect(refusal(await make('pin2', 8))).toEqual([400, 'pinned']);
    const two = (await make('pin2', 9)).body as { id: number; version: number };
    expect(refusal(await coordinator.patch(`/frames/${two.id}`, { pinned: 8, version: two.version }))).toEqual([400, 'pinned']);
    expect((await coordinator.patch(`/frames/${one.id}`, { pinned: 8, name: 'same', version: one.version })).status).toBe(200);
  });
});

describe('set-up as a whole', () => {
  it('27 refuses an edit of a version that is no longer the last, and one of nothing, wherever there is a version', async () => {
    const things = [
      [first(), { name: 'x' }],
      [`/runs/${setup.runId}`, { name: 'x' }],
      [`/sites/${world.sites.alpha}`, { name: 'x' }],
      [`/clocks/${setup.clockId}`, { name: 'x' }],
      [`/references/${setup.referenceId}`, { name: 'x' }],
      [`/frames/${setup.frameId}`, { name: 'x' }],
      [`/rules/${setup.ruleId}`, { name: 'x' }],
    ] as const;
    for (const [path, edit] of things) {
      expect(refusal(await world.as('coordinator').patch(path, { ...edit, version: 999 })), path).toEqual([409, 'version']);
      expect((await world.as('coordinator').patch(path, { version: 999 })).status, path).toBe(400);
    }
  });

  it('41 leaves an entry in the audit trail and a numbered change with each act, and neither with a refusal', async () => {
    const coordinator = world.as('coordinator');
    const counts = () => [
      app.ground.db.select().from(audit).all().length,
      app.ground.db.select().from(changes).where(eq(changes.kind, 'setup')).all().length,
    ];
    const [entries = 0, told = 0] = counts();
    await coordinator.post(first('/clocks'), { code: 'counted', segments: [segment(), segment()] }); // the second begins with the first
    expect(counts()).toEqual([entries, told]);
    expect((await itemsOf('coordinator', first('/clocks'))).map(({ code }) => code)).not.toContain('counted');
    await coordinator.post(first('/references'), { code: 'counted', sigmaNs: 1 });
    expect(counts()).toEqual([entries + 1, told + 1]);
  });

  it('is given out in pages', async () => {
    const found: unknown[] = [];
    let query = '?limit=2';
    for (;;) {
      const { items, next } = (await get('coordinator', first(`/sites${query}`))) as { items: { code: string }[]; next: string | null };
      found.push(...items.map(({ code }) => code));
      if (next === null) break;
      query = `?limit=2&cursor=${next}`;
    }
    expect(found).toEqual((await itemsOf('coordinator', first('/sites'))).map(({ code }) => code));
    expect(new Set(found).size).toBe(found.length);
  });

  it('15 is not changed by any GET', async () => {
    const chief = world.as('chief');
    const before = allRows(app.ground.db);
    const paths = ['', '/runs', '/sites', '/clocks', '/references', '/frames', '/rules'].map(first);
    for (const path of [
      ...paths,
      '/networks',
      '/tables-in-force',
      '/leap-second-tables',
      '/orientation-tables',
      `/clocks/${setup.clockId}`,
      `/frames/${setup.frameId}`,
    ])
      expect((await chief.get(path)).status, path).toBe(200);
    expect(allRows(app.ground.db)).toEqual(before);
  });

  it('is seen by none whose roles are in another network', async () => {
    expect(app.ground.db.select().from(networks).all().length).toBeGreaterThan(1);
    for (const path of [
      first('/sites'),
      `/sites/${world.sites.alpha}`,
      `/frames/${setup.frameId}`,
      `/rules/${setup.ruleId}`,
      `/clocks/${setup.clockId}`,
    ])
      expect((await world.as('otherCoordinator').get(path)).status, path).toBe(404);
  });
});
