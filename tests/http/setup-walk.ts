import { finalsFile } from '../support/finals';
import { NEW_YEAR_TAI_S, segment, siteState, type Setup } from '../support/setup';
import { type Persona, type World } from '../support/world';

/** What the walk over every route expects of one: who gets in, to whom its thing must look absent, and what is asked. */
export interface Expected {
  readonly in: readonly Persona[];
  readonly hidden?: readonly Persona[];
  readonly path?: () => string;
  readonly body?: () => unknown;
}

const EVERYONE: readonly Persona[] = [
  'chief',
  'coordinator',
  'analyst',
  'reviewer',
  'operator',
  'otherOperator',
  'otherCoordinator',
  'nobodySpecial',
];
const OUTSIDE: readonly Persona[] = ['otherCoordinator', 'nobodySpecial'];
const OF_NETWORK = EVERYONE.filter((persona) => !OUTSIDE.includes(persona));
/** Who has site alpha, and the clock by which it keeps time. */
const OF_ALPHA = OF_NETWORK.filter((persona) => persona !== 'otherOperator');
const NOT_ALPHA: readonly Persona[] = ['otherOperator', ...OUTSIDE];
const COORDINATE: readonly Persona[] = ['chief', 'coordinator'];
const ANALYSE: readonly Persona[] = ['chief', 'coordinator', 'analyst'];
const KEEP_ALPHA: readonly Persona[] = ['chief', 'coordinator', 'operator'];

const UNSEEN = { version: 999 };
const RENAMED = { name: 'x' };

/**
 * What each asker may get from the routes of set-up, for things of the first network and its site alpha; codes that are taken and versions that
 * nobody saw, so that nothing changes.
 */
export function setupWalk(world: () => World, setup: () => Setup): Readonly<Record<string, Expected>> {
  const ofNetwork = (rest: string) => () => `/networks/${world().networks.first}${rest}`;
  const ofAlpha = (rest: string) => () => `/sites/${world().sites.alpha}${rest}`;
  const ofClock = (rest: string) => () => `/clocks/${setup().clockId}${rest}`;
  const ofFrame = (rest: string) => () => `/frames/${setup().frameId}${rest}`;
  const ofRule = (rest: string) => () => `/rules/${setup().ruleId}${rest}`;
  const read = (path: () => string): Expected => ({ in: OF_NETWORK, hidden: OUTSIDE, path });
  const edit = (who: readonly Persona[], path: () => string, body: object = {}): Expected => ({
    in: who,
    hidden: OUTSIDE,
    path,
    body: () => ({ ...UNSEEN, ...body }),
  });
  const make = (who: readonly Persona[], path: () => string, body: object): Expected => ({
    in: who,
    hidden: OUTSIDE,
    path,
    body: () => body,
  });
  const ofTables = (path: () => string): Expected => ({ in: EVERYONE, path });
  return {
    'GET /networks': { in: EVERYONE },
    'GET /networks/:networkId': read(ofNetwork('')),
    'POST /networks': { in: ['chief'], body: () => ({ code: 'FIRST', name: 'x', origin: '2026-01-01T00:00:00Z' }) },
    'PATCH /networks/:networkId': edit(COORDINATE, ofNetwork(''), RENAMED),
    'POST /networks/:networkId/close': { in: ['chief'], path: ofNetwork('/close'), body: () => UNSEEN },
    'GET /networks/:networkId/runs': read(ofNetwork('/runs')),
    'POST /networks/:networkId/runs': make(COORDINATE, ofNetwork('/runs'), { code: 'night', from: { taiS: NEW_YEAR_TAI_S, ps: 0 } }),
    'PATCH /runs/:runId': edit(COORDINATE, () => `/runs/${setup().runId}`, RENAMED),
    'GET /networks/:networkId/sites': read(ofNetwork('/sites')),
    'GET /sites/:siteId': { in: OF_ALPHA, hidden: NOT_ALPHA, path: ofAlpha('') },
    'POST /networks/:networkId/sites': make(COORDINATE, ofNetwork('/sites'), { code: 'ALPHA', state: siteState() }),
    'PATCH /sites/:siteId': { ...edit(KEEP_ALPHA, ofAlpha(''), RENAMED), hidden: NOT_ALPHA },
    'POST /sites/:siteId/versions': { ...edit(KEEP_ALPHA, ofAlpha('/versions'), siteState()), hidden: NOT_ALPHA },
    'POST /sites/:siteId/close': { ...edit(COORDINATE, ofAlpha('/close')), hidden: NOT_ALPHA },
    'GET /networks/:networkId/clocks': read(ofNetwork('/clocks')),
    'GET /clocks/:clockId': { in: OF_ALPHA, hidden: NOT_ALPHA, path: ofClock('') },
    'GET /clocks/:clockId/segments': { in: OF_ALPHA, hidden: NOT_ALPHA, path: ofClock('/segments') },
    'POST /networks/:networkId/clocks': make([...KEEP_ALPHA, 'otherOperator'], ofNetwork('/clocks'), { code: 'maser' }),
    'PATCH /clocks/:clockId': { ...edit(KEEP_ALPHA, ofClock(''), RENAMED), hidden: NOT_ALPHA },
    'POST /clocks/:clockId/segments': { ...edit(KEEP_ALPHA, ofClock('/segments'), segment()), hidden: NOT_ALPHA },
    'POST /clocks/:clockId/segments/:segment/edit': { ...edit(KEEP_ALPHA, ofClock('/segments/1/edit'), segment()), hidden: NOT_ALPHA },
    'POST /clocks/:clockId/segments/:segment/end': { ...edit(KEEP_ALPHA, ofClock('/segments/1/end')), hidden: NOT_ALPHA },
    'GET /networks/:networkId/references': read(ofNetwork('/references')),
    'POST /networks/:networkId/references': make(COORDINATE, ofNetwork('/references'), { code: 'fountain', sigmaNs: 4 }),
    'PATCH /references/:referenceId': edit(COORDINATE, () => `/references/${setup().referenceId}`, RENAMED),
    'GET /networks/:networkId/frames': read(ofNetwork('/frames')),
    'GET /frames/:frameId': read(ofFrame('')),
    'POST /networks/:networkId/frames': make(ANALYSE, ofNetwork('/frames'), { code: 'bary', motion: { kind: 'barycentric' } }),
    'PATCH /frames/:frameId': edit(ANALYSE, ofFrame(''), RENAMED),
    'POST /frames/:frameId/close': edit(ANALYSE, ofFrame('/close')),
    'GET /networks/:networkId/rules': read(ofNetwork('/rules')),
    'GET /rules/:ruleId': read(ofRule('')),
    'GET /rules/:ruleId/versions': read(ofRule('/versions')),
    'POST /networks/:networkId/rules': make(ANALYSE, ofNetwork('/rules'), { code: 'light2', state: { window: { kind: 'light-time' } } }),
    'PATCH /rules/:ruleId': edit(ANALYSE, ofRule(''), RENAMED),
    'POST /rules/:ruleId/activate': edit(ANALYSE, ofRule('/activate')),
    'POST /rules/:ruleId/deactivate': edit(ANALYSE, ofRule('/deactivate')),
    'GET /tables-in-force': { in: EVERYONE },
    'GET /leap-second-tables': { in: EVERYONE },
    'GET /leap-second-tables/:tableId': ofTables(() => `/leap-second-tables/${setup().leapSecondTableId}`),
    'POST /leap-second-tables': { in: ['chief'], body: () => ({ text: 'no list' }) },
    'POST /leap-second-tables/:tableId/put-in-force': {
      in: ['chief'],
      path: () => `/leap-second-tables/${setup().leapSecondTableId}/put-in-force`,
    },
    'GET /orientation-tables': { in: EVERYONE },
    'GET /orientation-tables/:tableId': ofTables(() => `/orientation-tables/${setup().orientationTableId}`),
    'POST /orientation-tables': { in: ['chief'], body: () => ({ text: finalsFile('2026-01-01', 30, 30) }) },
    'POST /orientation-tables/:tableId/put-in-force': {
      in: ['chief'],
      path: () => `/orientation-tables/${setup().orientationTableId}/put-in-force`,
    },
  };
}
