import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type CoincidenceBrief, type CoincidenceInFull } from '#shared/contract/coincidence';
import { COINCIDENCE_SORTS, type CoincidenceSort } from '#shared/contract/coincidence-routes';
import { type EventBrief } from '#shared/contract/event-routes';
import { MOST_SPAN_S } from '#shared/contract/list-query';
import { fromUnbounded } from '#shared/contract/unbounded';
import { makeSearcher } from '../../backend/search/searcher';
import { eventListQuery } from '../../backend/events/event-list';
import { fillCoincidences, fillEvents, fillGround, fillTheRest, FIRST_TAI_S } from '../database/filled';
import { startApp, type RunningApp } from '../support/app';
import { type Client } from '../support/client';
import { signIn } from '../support/sign-in';

/** More than a page, and of each class, site and second many. */
const ROWS = 1_200;
const NETWORK = 1;

let app: RunningApp;
let analyst: Client;
let operator: Client;
beforeAll(async () => {
  app = await startApp();
  const client = app.ground.db.$client;
  client.transaction(() => {
    fillGround(client);
    fillEvents(client, ROWS);
    fillCoincidences(client, ROWS);
    fillTheRest(client, ROWS);
    // A second network, whose site and rule may not lead into the first.
    client.exec(`INSERT INTO networks (id, code, name, origin_tai_s, origin_ps, created_at) VALUES (2, 'two', 'Two', 0, 0, '2026-03-01T00:00:00.000Z');
      INSERT INTO sites (id, network_id, code, name, created_at) VALUES (99, 2, 'Z', '', '2026-03-01T00:00:00.000Z')`);
  })();
  analyst = signIn(app, [{ role: 'analyst', networkId: NETWORK, siteId: null }]);
  operator = signIn(
    app,
    [2, 5].map((siteId) => ({ role: 'operator', networkId: NETWORK, siteId }) as const),
  );
});
afterAll(async () => {
  await app.close();
});

interface Part<Item> {
  readonly items: Item[];
  readonly next: string | null;
  readonly back: string | null;
}

async function partOf<Item>(path: string, client = analyst): Promise<Part<Item>> {
  const { status, body, text } = await client.get(path);
  expect(status, `${path}: ${text.slice(0, 300)}`).toBe(200);
  return body as Part<Item>;
}

/** All of a list, from part to part. */
async function whole<Item>(path: string, client = analyst, limit = 200): Promise<Item[]> {
  const all: Item[] = [];
  for (let cursor = ''; ;) {
    const { items, next } = await partOf<Item>(`${path}${path.includes('?') ? '&' : '?'}limit=${limit}${cursor}`, client);
    all.push(...items);
    if (next === null) return all;
    cursor = `&cursor=${next}`;
  }
}

const events = `/networks/${NETWORK}/events`;
const coincidences = `/networks/${NETWORK}/coincidences`;
const timeOf = ({ at }: EventBrief): number => at.taiS * 1e6 + at.ps / 1e6;
const isSorted = (values: readonly number[], order: 'up' | 'down'): boolean =>
  values.every((value, k) => k === 0 || (order === 'up' ? value >= values[k - 1]! : value <= values[k - 1]!));

describe('events of a network', () => {
  it('come once each in time order, in either order', async () => {
    const [up, down] = [await whole<EventBrief>(events), await whole<EventBrief>(`${events}?order=down`)];
    expect(up).toHaveLength(ROWS);
    expect(isSorted(up.map(timeOf), 'up')).toBe(true);
    expect(down).toEqual(up.toReversed());
  });

  it('go on from any position both ways', async () => {
    const first = await partOf<EventBrief>(`${events}?limit=20`);
    const second = await partOf<EventBrief>(`${events}?limit=20&cursor=${first.next}`);
    const before = await partOf<EventBrief>(`${events}?limit=20&cursor=${second.back}&order=down`);
    expect(before.items.toReversed()).toEqual(first.items);
    expect(before.next).toBeNull();
  });

  it.each([
    ['', []],
    ['&siteIds=3', [3]],
    ['&siteIds=3,7,8', [3, 7, 8]],
  ])('are kept to a span and to sites %s, whose events are merged in time order', async (query, sites) => {
    const span = `from=${FIRST_TAI_S + 10}&to=${FIRST_TAI_S + 20},500000000000`;
    const found = await whole<EventBrief>(`${events}?${span}${query}`, analyst, 7);
    const expected = (await whole<EventBrief>(events)).filter(
      ({ at, siteId }) =>
        at.taiS >= FIRST_TAI_S + 10 &&
        (at.taiS < FIRST_TAI_S + 20 || (at.taiS === FIRST_TAI_S + 20 && at.ps < 5e11)) &&
        (sites.length === 0 || sites.includes(siteId)),
    );
    expect(found.length).toBeGreaterThan(10);
    expect(found).toEqual(expected);
  });

  it('are kept to a kind by a search', async () => {
    expect(await whole<EventBrief>(`${events}?kind=test`)).toEqual([]);
    expect(await whole<EventBrief>(`${events}?kind=trigger&siteIds=3,4`)).toHaveLength(ROWS / 4);
  });

  it('23 are, for an operator, those of their own sites alone', async () => {
    const seen = await whole<EventBrief>(events, operator);
    expect(new Set(seen.map(({ siteId }) => siteId))).toEqual(new Set([2, 5]));
    expect(seen).toHaveLength(ROWS / 4);
    expect(await whole<EventBrief>(`${events}?siteIds=2,3`, operator)).toHaveLength(ROWS / 8);
    expect(await partOf(`${events}?siteIds=3`, operator)).toMatchObject({ items: [], next: null, back: null });
    const other = (await partOf<EventBrief>(`${events}?siteIds=3&limit=1`)).items[0]!.id;
    const { status, text } = await operator.get(`/events/${other}`);
    const absent = await operator.get('/events/9999999');
    expect([status, withoutId(text)]).toEqual([404, withoutId(absent.text)]);
    const pairs = await operator.get(`/networks/${NETWORK}/pairs?events=${seen[0]!.id},${other}`);
    expect([pairs.status, withoutId(pairs.text)]).toEqual([404, withoutId(absent.text)]);
  });

  it('of another network are not led to by the ids of its sites', async () => {
    expect(await partOf(`${events}?siteIds=99`)).toMatchObject({ items: [], next: null, back: null });
  });
});

const withoutId = (text: string): string => text.replace(/"id":"[^"]*"/, '');

/** What each sort sorts by. */
const KEYS: Readonly<Record<CoincidenceSort, (item: CoincidenceBrief) => number | null>> = {
  time: ({ first }) => first.taiS * 1e6 + first.ps / 1e6,
  fold: ({ fold }) => fold,
  margin: ({ nearestMarginSigma }) => fromUnbounded(nearestMarginSigma),
  span: ({ spanNs }) => spanNs,
  turning: ({ leastTurningSpeedC }) => leastTurningSpeedC,
  amplitude: ({ amplitude }) => amplitude,
};

describe('coincidences in force', () => {
  let all: CoincidenceBrief[];
  beforeAll(async () => {
    all = await whole<CoincidenceBrief>(coincidences);
  });

  it('are told with their members and, when they are few, their pairs', () => {
    expect(all).toHaveLength(ROWS * 0.9);
    const { members, pairs, first } = all[5]!;
    expect(members.map(({ name }) => name)).toEqual([expect.stringMatching(/^S\d:\d+$/), expect.stringMatching(/^S\d:\d+$/)]);
    expect(members.every(({ offsetNs }) => Number.isFinite(offsetNs))).toBe(true);
    expect(pairs).toMatchObject([{ a: 1, b: 2, class: all[5]!.class }]);
    expect(first.taiS).toBeGreaterThanOrEqual(FIRST_TAI_S);
  });

  it.each(COINCIDENCE_SORTS)('come once each by %s, in either order', async (sort) => {
    const having = all.filter((item) => KEYS[sort](item) !== null);
    const up = await whole<CoincidenceBrief>(`${coincidences}?sort=${sort}`);
    const down = await whole<CoincidenceBrief>(`${coincidences}?sort=${sort}&order=down`);
    expect(new Set(up.map(({ id }) => id))).toEqual(new Set(having.map(({ id }) => id)));
    expect(up).toHaveLength(having.length);
    expect(
      isSorted(
        up.map((item) => KEYS[sort](item)!),
        'up',
      ),
    ).toBe(true);
    expect(down).toEqual(up.toReversed());
  });

  const has =
    (...sites: readonly string[]) =>
    (item: CoincidenceBrief) =>
      sites.every((site) => item.members.some((member) => member.site === site));
  const FILTERS: readonly (readonly [string, (item: CoincidenceBrief) => boolean])[] = [
    ['class=spacelike', (item) => item.class === 'spacelike'],
    ['state=open', (item) => item.state === 'open'],
    ['state=final&class=timelike', (item) => item.state === 'final' && item.class === 'timelike'],
    ['siteIds=4', has('S4')],
    ['siteIds=4,5', has('S4', 'S5')],
    ['siteIds=4,5&class=undecided', (item) => has('S4', 'S5')(item) && item.class === 'undecided'],
    ['ruleId=1&siteIds=3', has('S3')],
    ['name=0000000000f', ({ name }) => name.startsWith('0000000000f')],
    ['leastFold=2', () => true],
    ['leastFold=3', () => false],
    [`from=${FIRST_TAI_S + 20}&to=${FIRST_TAI_S + 40}`, ({ first }) => first.taiS >= FIRST_TAI_S + 20 && first.taiS < FIRST_TAI_S + 40],
  ];
  describe.each(['time', 'fold', 'margin', 'turning'] as const)('by %s', (sort) => {
    it.each(FILTERS)('with %s are those that are so, once each, in order', async (query, keep) => {
      const expected = all.filter((item) => keep(item) && KEYS[sort](item) !== null);
      for (const order of ['up', 'down'] as const) {
        const found = await whole<CoincidenceBrief>(`${coincidences}?sort=${sort}&order=${order}&${query}`, analyst, 60);
        expect(found.map(({ id }) => id).toSorted((a, b) => a - b)).toEqual(expected.map(({ id }) => id).toSorted((a, b) => a - b));
        expect(
          isSorted(
            found.map((item) => KEYS[sort](item)!),
            order,
          ),
        ).toBe(true);
      }
    });
  });

  it('of another network are not led to by the ids of its sites or rules', async () => {
    for (const query of ['siteIds=99', 'siteIds=1,99', 'ruleId=7']) expect((await partOf(`${coincidences}?${query}`)).items).toEqual([]);
  });

  it('are told in full', async () => {
    const { body } = await analyst.get(`/coincidences/${all[4]!.id}`);
    const { members, pairs, ruleVersion, name, setHash } = body as CoincidenceInFull;
    expect([members.length, pairs.length, ruleVersion.code, setHash.slice(0, 12)]).toEqual([2, 1, 'light2', name]);
    expect((await analyst.get('/coincidences/9999999')).status).toBe(404);
  });

  it('23 are not for operators, to whom the events of other sites would show', async () => {
    expect((await operator.get(coincidences)).status).toBe(403);
  });
});

describe('32 sort and filter names', () => {
  it.each([
    'sort=id', 'sort=first_tai_s', 'sort=time;--', 'sort=time&sort=fold', 'sort[]=time', 'order=sideways', 'class=null', 'class=timelike,spacelike',
    'state=former', 'state=staged', 'name=zzzz', 'name=ab', 'name=%25%25%25%25', 'leastFold=1', 'leastFold=2.5', 'ruleId=0', 'siteIds=', 'siteIds=1,1',
    'siteIds=1;2', 'filter=1', '__proto__=1', 'cursor=', 'cursor=AAAA', `cursor=${Buffer.from('time 1 2').toString('base64url')}`,
    `cursor=${Buffer.from('time 1 2 NaN').toString('base64url')}`, `cursor=${Buffer.from('time 1 2 3 4').toString('base64url')}`,
    `cursor=${Buffer.from('margin 1 2').toString('base64url')}`, `cursor=${Buffer.from("time 1 2 '3'").toString('base64url')}`,
  ])('are from a list: %s is refused', async (query) => {
    const { status, text } = await analyst.get(`${coincidences}?${query}`);
    expect([status, JSON.parse(text)], text).toMatchObject([400, { title: 'Unusable request' }]);
  }); // prettier-ignore

  it.each([
    ['events', 'live spans', '/networks/1/events?limit=1', `/sites/1/live-spans`],
    ['live spans', 'events', '/sites/1/live-spans?limit=1', '/networks/1/events'],
    ['series', 'gaps', '/sites/1/series?limit=1', '/sites/1/gaps'],
  ])('do not take a position of another list: of %s in %s', async (_from, _to, from, to) => {
    const { back, next } = (await analyst.get(from)).body as { back?: string; next: string };
    expect((await analyst.get(`${to}?cursor=${back ?? next}`)).body).toMatchObject({ status: 400, where: 'cursor' });
  });

  it.each(['sort=amplitude', 'kind=other', 'order=sideways', 'siteIds=1,1', 'sigmaNs=1', 'cursor=AAAA', 'limit=1&limit=2'])(
    'are from a list, of events too: %s',
    async (query) => expect((await analyst.get(`${events}?${query}`)).body).toMatchObject({ status: 400, where: query.split('=')[0] }),
  );

  it.each(['sort=name', 'order=up', 'email=a@example.org', 'passwordHash=1', 'cursor=x', 'limit=0'])(
    'are from a list, of people too: %s',
    async (query) => {
      const coordinator = signIn(app, [{ role: 'coordinator', networkId: NETWORK, siteId: null }]);
      expect((await coordinator.get(`/people?${query}`)).body).toMatchObject({ status: 400, where: query.split('=')[0] });
    },
  );

  it.each(['state=decided', 'reason=bad', 'sort=id', 'siteIds=x'])('are from a list, of set-asides too: %s', async (query) => {
    expect((await analyst.get(`/networks/${NETWORK}/set-asides?${query}`)).status).toBe(400);
  });
});

describe('33 page size and span', () => {
  it.each([
    'limit=0',
    'limit=201',
    'limit=1e2',
    'limit=-1',
    `from=0&to=${MOST_SPAN_S + 1}`,
    'from=5&to=5',
    'from=6&to=5',
    'from=1,1000000000000',
    'from=x',
  ])('are capped: %s is refused', async (query) => {
    for (const list of [events, coincidences]) expect((await analyst.get(`${list}?${query}`)).status, list).toBe(400);
  });

  it('are full at the most that is allowed', async () => {
    expect((await partOf(`${events}?limit=200&from=${FIRST_TAI_S}&to=${FIRST_TAI_S + MOST_SPAN_S}`)).items).toHaveLength(200);
  });
});

describe('33 heavy searches', () => {
  const search = (kind: 'trigger' | 'test') => ({
    narrowings: [],
    walk: eventListQuery({ networkId: NETWORK, siteIds: undefined, kind, order: 'up', limit: 200 }),
  });

  it('run two at a time, and beyond are told when to try again', async () => {
    const searcher = makeSearcher(app.ground.db.$client.name);
    const three = await Promise.allSettled([1, 2, 3].map(() => searcher.run(search('trigger'))));
    expect(three.map(({ status }) => status)).toEqual(['fulfilled', 'fulfilled', 'rejected']);
    expect(three[2]).toMatchObject({ reason: { status: 503, headers: { 'Retry-After': '1' } } });
    expect(await searcher.run(search('trigger'))).toHaveLength(201);
    await searcher.close();
  });

  it('end at their limit of time, and the thread goes on', async () => {
    const searcher = makeSearcher(app.ground.db.$client.name, { limitMs: -1 });
    await expect(searcher.run(search('test'))).rejects.toMatchObject({ status: 503, title: 'Took too long' });
    await expect(searcher.run(search('test'))).rejects.toMatchObject({ status: 503, title: 'Took too long' });
    await searcher.close();
  });

  it('that fail are a fault, and leave room for others', async () => {
    const searcher = makeSearcher(app.ground.db.$client.name, { most: 1 });
    await expect(searcher.run({ narrowings: [], walk: { sql: 'SELECT absent', values: [] } })).rejects.toThrow('no such column');
    await expect(searcher.run({ narrowings: [], walk: { sql: 'DELETE FROM changes', values: [] } })).rejects.toThrow('data');
    expect(await searcher.run(search('trigger'))).toHaveLength(201);
    await searcher.close();
  });
});

interface SetAsideItem {
  readonly id: number;
  readonly siteId: number;
  readonly state: string;
  readonly reason: string;
}

describe('set-asides', () => {
  const setAsides = `/networks/${NETWORK}/set-asides`;

  it('are the open ones, by reason, by site, and all', async () => {
    const all = await whole<SetAsideItem>(`${setAsides}?state=all`);
    expect(all).toHaveLength(ROWS);
    const cases: readonly (readonly [string, (item: SetAsideItem) => boolean])[] = [
      ['', ({ state }) => state === 'open'],
      ['reason=sigma', ({ state, reason }) => state === 'open' && reason === 'sigma'],
      ['siteIds=3', ({ state, siteId }) => state === 'open' && siteId === 3],
      [
        'siteIds=3,4&state=dismissed&reason=date',
        ({ state, siteId, reason }) => state === 'dismissed' && [3, 4].includes(siteId) && reason === 'date',
      ],
      ['state=dismissed', ({ state }) => state === 'dismissed'],
    ];
    for (const [query, keep] of cases)
      for (const order of ['up', 'down'] as const) {
        const found = await whole<SetAsideItem>(`${setAsides}?order=${order}&${query}`);
        const expected = all.filter(keep).map(({ id }) => id);
        expect(
          found.map(({ id }) => id),
          query,
        ).toEqual(order === 'up' ? expected : expected.toReversed());
      }
  });

  it('23 are, for an operator, those of their own sites', async () => {
    const seen = await whole<SetAsideItem>(`${setAsides}?state=all`, operator);
    expect(new Set(seen.map(({ siteId }) => siteId))).toEqual(new Set([2, 5]));
    const other = (await partOf<SetAsideItem>(`${setAsides}?siteIds=3`)).items[0]!.id;
    expect((await operator.get(`/set-asides/${other}`)).status).toBe(404);
  });
});

describe('changes of a network', () => {
  it('come behind a number, and say when some are no longer kept', async () => {
    const { body } = await analyst.get(`/networks/${NETWORK}/changes?after=${ROWS - 3}&limit=2`);
    expect(body).toMatchObject({
      items: [{ number: ROWS - 2 }, { number: ROWS - 1 }],
      next: String(ROWS - 1),
      last: ROWS,
      isMissing: false,
    });
    app.ground.db.$client.exec('UPDATE change_heads SET oldest = 100 WHERE network_id = 1');
    const missing = async (after: number): Promise<boolean> =>
      ((await analyst.get(`/networks/${NETWORK}/changes?after=${after}`)).body as { isMissing: boolean }).isMissing;
    expect([await missing(98), await missing(99)]).toEqual([true, false]);
    expect((await operator.get(`/networks/${NETWORK}/changes?after=0`)).status).toBe(403);
  });
});

describe('gaps of a site', () => {
  it('are none where nothing was sent, and absent for a numbering of a name that it has not', async () => {
    const ofTwo = signIn(app, [{ role: 'analyst', networkId: 2, siteId: null }]);
    expect(await ofTwo.get('/sites/99/gaps')).toMatchObject({ status: 200, body: { items: [], next: null } });
    expect((await ofTwo.get('/sites/99/gaps?series=other')).status).toBe(404);
  });
});

describe('every answer of these lists', () => {
  const PATHS = [
    events,
    coincidences,
    `/networks/${NETWORK}/set-asides`,
    '/sites/1/series',
    '/sites/1/gaps',
    '/sites/1/live-spans',
    `/networks/${NETWORK}/completeness`,
  ];

  it('19 is not stored, and 15 changes nothing', async () => {
    const commits = () => app.ground.db.$client.prepare('SELECT total_changes()').pluck().get();
    const before = [commits(), app.ground.db.$client.pragma('data_version', { simple: true })];
    for (const path of PATHS) expect((await analyst.get(path)).headers.get('cache-control'), path).toBe('no-store');
    expect([commits(), app.ground.db.$client.pragma('data_version', { simple: true })]).toEqual(before);
  });

  it('30 has no content hash, token or path', async () => {
    for (const path of PATHS) expect((await analyst.get(path)).text, path).not.toMatch(/[0-9a-f]{64}|"\w*[hH]ash"|sqlite/);
  });
});
