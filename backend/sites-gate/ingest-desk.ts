import { problemOf, valueOf } from '#shared/outcome';
import { type Runs } from '#shared/contract/site-socket';
import { type Ingest, type RecordAnswer } from '../ingest/ingest';
import { type SeriesStanding } from '../ingest/resume';
import { type BatchFates, type SiteDesk } from './site-desk';

const MOST_RANGES = 1_000; // of all series together, so that a welcome stays small

/** The desk of sites as the ingest keeps it; it works where the ingest does. */
export const ingestDesk = (ingest: Ingest): SiteDesk => ({
  hello: (sender) => {
    const { connectionId, series, completeUpTo } = ingest.hello(sender.siteId, sender.keyId);
    return Promise.resolve({ connectionId, ...heldOf(series), completeTo: completeUpTo ?? null });
  },
  batch: async ({ siteId }, records) => fatesOf(await ingest.batch(siteId, records)),
  state: async ({ siteId }, { completeTo, live = [] }) => {
    const said = await ingest.complete(siteId, {
      upTo: completeTo,
      live: live.map(({ from, to }) => ({ from, to: to ?? undefined })),
    });
    if (said.ok) return valueOf(said.value ?? null);
    const { code, where, text } = said.problem;
    return problemOf(code, where === 'upTo' ? 'completeTo' : where, text);
  },
  bye: (connectionId, why) => {
    ingest.bye(connectionId, why);
    return Promise.resolve();
  },
});

/** What is held, as far as a welcome tells it. */
function heldOf(series: readonly SeriesStanding[]): Pick<Awaited<ReturnType<SiteDesk['hello']>>, 'series' | 'more'> {
  let left = MOST_RANGES;
  const isAllOf = (one: SeriesStanding, ranges: number): boolean => !one.isCut && ranges === one.held.length;
  const told = series.slice(0, MOST_RANGES).map(({ series: name, first, contiguous, held }) => {
    const ranges = held.slice(0, left);
    left -= ranges.length;
    return { series: name, first, contiguous, held: ranges.map(([from, to]) => ({ first: from, last: to })) };
  });
  return { series: told, more: series.some((one, index) => !isAllOf(one, told[index]?.held.length ?? -1)) };
}

/** Fates in the order of the rows, as runs. */
export function fatesOf(answers: readonly RecordAnswer[]): BatchFates {
  const runs: Record<'stored' | 'known' | 'unknown', Runs> = { stored: [], known: [], unknown: [] };
  const setAside: BatchFates['setAside'][number][] = [];
  for (const [row, { fate, reason, detail }] of answers.entries()) {
    if (fate === 'set-aside') {
      setAside.push({ row, reason: reason ?? '', detail: detail ?? '' });
      continue;
    }
    const last = runs[fate].at(-1);
    if (last && last[0] + last[1] === row) last[1]++;
    else runs[fate].push([row, 1]);
  }
  return { ...runs, setAside };
}
