import { change } from '../../backend/audit/change';
import { addSegment, makeClock } from '../../backend/clocks/make-clock';
import { makeReference } from '../../backend/clocks/make-reference';
import { makeFrame } from '../../backend/frames/make-frame';
import { makeRun } from '../../backend/networks/make-run';
import { makeRule } from '../../backend/rules/make-rule';
import { addSiteState } from '../../backend/sites/make-site';
import { keepLeapSecondTable } from '../../backend/tables/leap-second-tables';
import { keepOrientationTable } from '../../backend/tables/orientation-tables';
import { type RunningApp } from './app';
import { finalsFile } from './finals';
import { leapSecondsFile } from './leap-seconds';
import { type World } from './world';

/** 2026-01-01T00:00:00 TAI. */
export const NEW_YEAR_TAI_S = 1_767_225_600;

/** NTP seconds of 2028-06-28, later than the shipped list's expiry. */
export const LATER_EXPIRY_NTP_S = 4_054_752_000;

/** A state of a site on the ground, with an exact clock, from ever on. */
export const siteState = (more: Readonly<Record<string, unknown>> = {}) => ({
  from: null,
  scale: 'UTC' as const,
  clockId: null as number | null,
  exactClock: true,
  position: { geodetic: { latitudeDeg: 41.2, longitudeDeg: -112.7, heightM: 1680 } },
  positionSigmaM: 0.05,
  delayNs: 412.5,
  delaySigmaNs: 1.5,
  readingSigmaNs: 20,
  origin: 'survey' as const,
  note: '',
  ...more,
});

/** A stretch of a clock record, from New Year 2026 or so many days later. */
export const segment = (day = 0) => {
  const from = { taiS: NEW_YEAR_TAI_S + day * 86_400, ps: 0 };
  return { from, at: from, offsetNs: 100, offsetSigmaNs: 5, rateNsPerDay: 2, rateSigmaNsPerDay: 0.5, origin: 'certificate' as const };
};

/** One thing of each kind in the first network of the world: a clock by which its site alpha keeps time, and so on. */
export function makeSetup({ ground }: RunningApp, world: World) {
  const networkId = world.networks.first;
  const actor = { kind: 'server', id: null, requestId: null } as const;
  return change(ground, actor, (tx, note) => {
    const making = { tx, note, actor, nowMs: ground.nowMs() };
    const clockId = makeClock(making, { networkId, code: 'maser' });
    addSegment(making, clockId, segment());
    addSiteState(making, world.sites.alpha, siteState({ clockId, exactClock: false }));
    addSiteState(making, world.sites.beta, siteState({ position: { itrsM: [3_513_638.2, 778_956.5, 5_248_216.5] } }));
    return {
      clockId,
      runId: makeRun(making, { networkId, code: 'night', from: { taiS: NEW_YEAR_TAI_S, ps: 0 }, to: null }),
      referenceId: makeReference(making, { networkId, code: 'fountain', sigmaNs: 4 }),
      frameId: makeFrame(making, { networkId, code: 'bary', motion: { kind: 'barycentric' } }),
      ruleId: makeRule(making, { networkId, code: 'light2', state: { window: { kind: 'light-time' } } }),
      leapSecondTableId: keepLeapSecondTable(making, leapSecondsFile({ expiresNtpS: LATER_EXPIRY_NTP_S })),
      orientationTableId: keepOrientationTable(making, finalsFile('2026-01-01', 30, 30)),
    };
  });
}

export type Setup = ReturnType<typeof makeSetup>;
