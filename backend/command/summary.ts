import { LIMITS } from '#shared/limits';
import { KINDS, SET_ASIDE_REASONS } from '#shared/reconcile/record';
import { type Network } from '#shared/reconcile/network';
import { createTaiWriter } from '#shared/time/format';
import { type Instant } from '#shared/time/instant';
import { type CoincidenceCounts } from './coincidence-tables';
import { type ClassCounts, instantOfEvent } from './event-tables';
import { type GroundAccount } from './ground-tables';
import { isLiveAt, type LiveTime, liveSeconds } from './live-time';
import { type FoundRecords } from './record-store';
import { type SortedEvents } from './sorted-events';

/** What one site's log came to. */
interface SiteSums {
  readonly events: Float64Array;
  first: Instant | undefined;
  last: Instant | undefined;
  outsideLive: number;
}

/** Everything that the summary tells of. */
export interface SummaryInput {
  readonly network: Network;
  readonly version: string;
  readonly ground: GroundAccount;
  readonly found: FoundRecords;
  readonly sorted: SortedEvents;
  readonly live: LiveTime | undefined;
  readonly coincidences: CoincidenceCounts;
  readonly pairs: ClassCounts;
  readonly neighbours: number | undefined;
  /** SHA-256 of every other result file, by name. */
  readonly hashes: ReadonlyMap<string, string>;
}

const sum = (counts: Iterable<number>): number => [...counts].reduce((total, count) => total + count, 0);

const byName = (names: readonly string[], counts: ArrayLike<number>): Record<string, number> =>
  Object.fromEntries(names.map((name, at) => [name, counts[at] ?? 0]));

/** Counts that are not 0. */
const seen = (counts: Record<string, number>): Record<string, number> =>
  Object.fromEntries(Object.entries(counts).filter(([, n]) => n > 0));

function siteSums({ network, sorted, live }: SummaryInput): readonly SiteSums[] {
  const sums = network.sites.map((): SiteSums => ({
    events: new Float64Array(KINDS.length),
    first: undefined,
    last: undefined,
    outsideLive: 0,
  }));
  for (let event = 0; event < sorted.events.count; event++) {
    const row = sorted.events.site[event] ?? 0;
    const site = sums[row];
    if (!site) continue;
    const kind = sorted.kind(event);
    site.events[kind] = (site.events[kind] ?? 0) + 1;
    const instant = instantOfEvent(sorted, event);
    site.first ??= instant;
    site.last = instant;
    if (live && kind === 0 && !isLiveAt(live[row] ?? [], instant)) site.outsideLive++;
  }
  return sums;
}

/**
 * The summary of a reconciliation, as it stands in `summary.json`. It does not depend on the order of the input lines or on how they were split
 * into files, but for the hash of `set-aside.csv`.
 */
export function summaryOf(input: SummaryInput): Record<string, unknown> {
  const { network, found, sorted, live, ground, coincidences } = input;
  const taiText = createTaiWriter();
  const sums = siteSums(input);
  const { counts } = found;
  const { events } = sorted;
  const reasons = SET_ASIDE_REASONS.map((_, reason) => sum(counts.setAside.map((ofSite) => ofSite[reason] ?? 0)));
  const optional = (instant: Instant | undefined): string | null => (instant ? taiText(instant) : null);
  return {
    software: { name: 'skewline', version: input.version },
    network: network.name,
    run: { name: network.runName, from_tai: taiText(network.from), to_tai: optional(network.to) },
    rule: { code: network.rule.code, sigmas: network.rule.sigmas, minimum_fold: network.rule.minimumFold },
    lines: sum(counts.lines),
    events: byName(
      KINDS,
      KINDS.map((_, kind) => sum(sums.map((site) => site.events[kind] ?? 0))),
    ),
    repeated: sum(counts.repeated),
    set_aside: { total: sum(reasons), ...seen(byName(SET_ASIDE_REASONS, reasons)) },
    coincidences: {
      total: sum(coincidences.byFold.values()),
      ...Object.fromEntries([...coincidences.byFold].sort(([a], [b]) => a - b).map(([fold, n]) => [String(fold), n])),
    },
    crowded: coincidences.crowded,
    pairs: input.pairs,
    neighbours: input.neighbours ?? null,
    span: {
      first_tai: events.count > 0 ? taiText(instantOfEvent(sorted, 0)) : null,
      last_tai: events.count > 0 ? taiText(instantOfEvent(sorted, events.count - 1)) : null,
    },
    live_time: live ? { total_s: sum(live.map(liveSeconds)), triggers_outside: sum(sums.map(({ outsideLive }) => outsideLive)) } : null,
    sites: Object.fromEntries(
      network.sites.map(({ code }, row) => [
        code,
        {
          lines: counts.lines[row] ?? 0,
          events: byName(KINDS, sums[row]?.events ?? []),
          repeated: counts.repeated[row] ?? 0,
          set_aside: { total: sum(counts.setAside[row] ?? []), ...seen(byName(SET_ASIDE_REASONS, counts.setAside[row] ?? [])) },
          first_tai: optional(sums[row]?.first),
          last_tai: optional(sums[row]?.last),
          ...(live && { live_s: liveSeconds(live[row] ?? []), triggers_outside_live: sums[row]?.outsideLive ?? 0 }),
        },
      ]),
    ),
    leap_seconds: ground.leapSeconds,
    earth_orientation: ground.orientation,
    files: Object.fromEntries([...input.hashes].sort(([a], [b]) => (a < b ? -1 : 1))),
    limits: LIMITS,
  };
}
