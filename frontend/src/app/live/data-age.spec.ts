import { describe, expect, it } from 'vitest';
import { type SiteStates } from '#shared/contract/site-state';
import { dataAge } from './data-age';

const site = (lastReceivedAtMs: number | null) => ({
  siteId: 1,
  site: 'ORL',
  completeTo: null,
  completeSaidAtMs: null,
  lastEventAt: null,
  lastReceivedAtMs,
  connectedAtMs: null,
  setAsidesLastHour: 0,
  delayMs: null,
  lastSigmaNs: null,
  eventsLastMinute: 0,
});
const states = (...received: readonly (number | null)[]): SiteStates => ({
  networkId: 1,
  change: 1,
  atMs: 100_000,
  completeTo: null,
  sites: received.map(site),
});

describe('the age of the data', () => {
  it('is that of the newest record of any site, and grows while nothing comes', () => {
    expect(dataAge(states(90_000, 98_500, null), 0)).toEqual({ behindS: 1.5, isQuiet: false });
    expect(dataAge(states(90_000, 98_500), 2_000)).toEqual({ behindS: 3.5, isQuiet: false });
  });

  it('is never before the present, whatever the clocks say', () => {
    expect(dataAge(states(100_200), 0).behindS).toBe(0);
  });

  it('is quiet after a minute, and where no record ever came', () => {
    expect(dataAge(states(99_000), 60_000).isQuiet).toBe(true);
    expect(dataAge(states(null), 0)).toEqual({ behindS: 0, isQuiet: true });
  });
});
