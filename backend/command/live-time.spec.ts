import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, describe, expect, it } from 'vitest';
import { buildNetwork } from '#shared/contract/build-network';
import { parseNetworkFile } from '#shared/contract/network-file';
import { constantOrientation } from '#shared/earth/earth-orientation';
import { earthRotation } from '#shared/earth/rotation';
import { type Network } from '#shared/reconcile/network';
import { shippedLeapSeconds } from '#shared/time/shipped-leap-seconds';
import { parseStatedTime } from '#shared/time/stated-time';
import { isLiveAt, type LiveTime, liveSeconds, readLiveTime } from './live-time';
import { UsageProblem } from './usage-problem';

const leapSeconds = shippedLeapSeconds();
const folder = mkdtempSync(join(tmpdir(), 'live-time-'));
afterAll(() => {
  rmSync(folder, { recursive: true });
});
const path = join(folder, 'live.csv');
const pace = { breathe: () => Promise.resolve() };

/** A network of the sites ORL and VES, in TAI. */
function twoSites(): Network {
  const site = (code: string, x: number) => ({ code, scale: 'TAI', clock: 'exact', position: { itrs_m: [x, 0, 0] } });
  const file = parseNetworkFile({
    network: 'Two',
    run: { from: '2016-01-01T00:00:00Z' },
    sites: [site('VES', 2), site('ORL', 1)],
    rule: { code: 'r', window: { kind: 'light-time' } },
  });
  if (!file.ok) throw new Error(file.problem.text);
  const network = buildNetwork(file.value, {
    leapSeconds,
    rotationFor: () => earthRotation(constantOrientation(-36)),
    earthBarycentricVelocityMS: () => [0, 0, 0],
  });
  if (!network.ok) throw new Error(network.problem.text);
  return network.value;
}

const network = twoSites();

function liveOf(text: string): Promise<LiveTime> {
  writeFileSync(path, text);
  return readLiveTime(path, network, leapSeconds, pace);
}

const instant = (text: string) => {
  const time = parseStatedTime(text, '', leapSeconds);
  if (!time.ok) throw new Error(time.problem.text);
  return time.value.instant;
};

describe('live time', () => {
  it('is that of each site, in the order of the network', async () => {
    const live = await liveOf(
      'site,from,to\nVES,2016-06-01T00:00:00Z,2016-06-01T00:01:40Z\nORL,2016-06-01T00:00:00Z,2016-06-01T00:00:01.5Z\n',
    );
    expect(live.map(liveSeconds)).toEqual([1.5, 100]);
  });

  it('takes columns in any order, and others beside them', async () => {
    const live = await liveOf('to,why,site,from\n2016-06-01T00:00:01Z,x,ORL,2016-06-01T00:00:00Z\n');
    expect(live.map(liveSeconds)).toEqual([1, 0]);
  });

  it('counts what overlaps, touches or repeats once, in whatever order it stands', async () => {
    const spans = [
      'ORL,2016-06-01T00:00:10Z,2016-06-01T00:00:20Z',
      'ORL,2016-06-01T00:00:00Z,2016-06-01T00:00:10Z',
      'ORL,2016-06-01T00:00:05Z,2016-06-01T00:00:06Z',
      'ORL,2016-06-01T00:00:15Z,2016-06-01T00:00:25Z',
      'ORL,2016-06-01T00:00:15Z,2016-06-01T00:00:25Z',
      'ORL,2016-06-01T00:00:30Z,2016-06-01T00:00:31Z',
    ];
    for (const order of [spans, spans.toReversed()]) {
      const [orl = []] = await liveOf(`site,from,to\n${order.join('\n')}\n`);
      expect(orl).toHaveLength(2);
      expect(liveSeconds(orl)).toBe(26);
    }
  });

  it('counts a leap second, and knows other scales', async () => {
    // IERS Bulletin C 52: a positive leap second at the end of 31 December 2016; TAI - UTC is 36 s before it.
    const live = await liveOf(
      'site,from,to\nORL,2016-12-31T23:59:59Z,2017-01-01T00:00:00Z\nVES,2016-12-31T23:59:59Z,2017-01-01T00:00:36 TAI\n',
    );
    expect(live.map(liveSeconds)).toEqual([2, 1]);
  });

  it('has both ends in each span', async () => {
    const [orl = [], ves = []] = await liveOf(
      'site,from,to\nORL,2016-06-01T00:00:00Z,2016-06-01T00:00:01Z\nORL,2016-06-01T00:00:05Z,2016-06-01T00:00:05Z\n',
    );
    const at = (text: string): boolean => isLiveAt(orl, instant(text));
    expect(at('2016-05-31T23:59:59.999999999999Z')).toBe(false);
    expect(at('2016-06-01T00:00:00Z')).toBe(true);
    expect(at('2016-06-01T00:00:01Z')).toBe(true);
    expect(at('2016-06-01T00:00:01.000000000001Z')).toBe(false);
    expect(at('2016-06-01T00:00:05Z')).toBe(true);
    expect(at('2016-06-01T00:00:06Z')).toBe(false);
    expect(isLiveAt(ves, instant('2016-06-01T00:00:00Z'))).toBe(false);
  });

  const span = '2016-06-01T00:00:00Z,2016-06-01T00:00:01Z';
  it.each([
    ['', 'is empty; its first line must be a header: site,from,to'],
    ['site,from\n', 'line 1: no column to in "site,from"; needed are site,from,to'],
    [`site,from,to\nXXX,${span}\n`, 'line 2, site: "XXX"; it must be a site of the network'],
    [`site,from,to\nORL,${span},\n`, 'line 2: 4 fields; the header has 3'],
    [`site,from,to\n\nORL,soon,2016-06-01T00:00:01Z\n`, 'line 3, from: "soon" is not of the form YYYY-MM-DDTHH:MM:SS'],
    [`site,from,to\nORL,2016-06-01T00:00:01Z,\n`, 'line 2, to: is empty; it must be YYYY-MM-DDTHH:MM:SS'],
    [
      'site,from,to\nORL,2016-06-01T00:00:01Z,2016-06-01T00:00:00Z\n',
      'line 2, to: "2016-06-01T00:00:00Z"; it must not be before from (2016-06-01T00:00:01Z)',
    ],
    [`site,from,to\n"ORL,${span}\n`, 'line 2: a quote is not closed, or followed by something else than a comma'],
  ])('is refused with its line: %j', async (text, message) => {
    const refusal = await liveOf(text).catch((fault: unknown) => fault);
    expect(refusal).toBeInstanceOf(UsageProblem);
    expect(String(refusal)).toContain(`${path}: ${message}`);
  });

  it('is refused by its option when there is no such file', async () => {
    await expect(readLiveTime(join(folder, 'none.csv'), network, leapSeconds, pace)).rejects.toThrow(
      /^--live: .*none\.csv: cannot be read/,
    );
  });
});
