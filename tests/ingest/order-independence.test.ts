import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type SiteRecord } from '#shared/contract/site-record';
import { checkConservation } from '../../backend/ingest/conservation';
import { type IngestAtWork, newIngest, record } from '../support/ingest';
import { smallNetwork } from '../support/small-network';

/** Each case fills two databases on disk. */
const RUNS = process.env['LONG'] ? 200 : 12;

const SITES = ['A', 'B'] as const;

/** Few identities, so that they are said again and contradicted; good, bad, too early, in the far future. */
const anyRecord: fc.Arbitrary<readonly [site: string, SiteRecord]> = fc.tuple(
  fc.constantFrom(...SITES),
  fc.record({
    series: fc.constantFrom('', '', 'b', 'no series'),
    sequence: fc.constantFrom('1', '2', '3', '5', '8', '07', '123456789012345678901', 'x'),
    kind: fc.constantFrom('', '', 'test', 'nonsense'),
    reading: fc.constantFrom(
      '2026-03-01T12:00:00.000000001',
      '2026-03-01T12:00:00.000000002',
      '2026-03-01T13:00:07.5',
      '2019-03-01T12:00:00',
      '2031-03-01T12:00:00',
      '2026-02-30T12:00:00',
    ),
    readingForm: fc.constant('iso' as const),
    sigmaNs: fc.constantFrom('', '', '20', '-1'),
    amplitude: fc.constantFrom('', '1.5'),
  }),
);

/** Every table that says what there is, without what only tells the order in which it came: ids, receive times, numbers of versions. */
function tables({ db }: IngestAtWork): Record<string, unknown[]> {
  const named = 'JOIN sites AS s ON s.id = t.site_id';
  const all = (query: string): unknown[] => db.$client.prepare(query).all();
  return {
    triggers: all(
      `SELECT s.code, t.series, t.sequence, kind, reading, reading_form, sigma, amplitude, extra, hex(content_hash) AS hash FROM triggers AS t ${named}
       ORDER BY s.code, t.series, t.sequence, hash`,
    ),
    events: all(
      `SELECT s.code, t.series, t.sequence, hex(t.content_hash) AS hash, e.kind, tai_s, ps, x_m, y_m, z_m, reading_sigma_ns, sigma_origin, sigma_ns,
         since_epoch_days, e.amplitude, g.site_version_id, g.segment_id, g.run_id FROM events AS e JOIN triggers AS t ON t.id = e.trigger_id
       JOIN groundings AS g ON g.id = e.grounding_id ${named} ORDER BY s.code, t.series, t.sequence`,
    ),
    setAsides: all(
      `SELECT s.code, t.series, t.sequence, trigger_id IS NULL AS unread, reason, detail, verbatim, hex(content_hash) AS hash, state, retry_at_ms
       FROM set_asides AS t ${named} ORDER BY s.code, hash, reason`,
    ),
    series: all(
      `SELECT s.code, series, received, stored, known, set_aside, withdrawn, first, contiguous FROM series AS t ${named} ORDER BY s.code, series`,
    ),
    heldRanges: all(`SELECT s.code, series, first, last FROM held_ranges AS t ${named} ORDER BY s.code, series, first_digits, first`),
    rates: all(`SELECT s.code, kind, width_s, from_tai_s, events FROM event_rates AS t ${named} ORDER BY 1, 2, 3, 4`),
    histograms: all(`SELECT s.code, quantity, sign, bin, events FROM event_histograms AS t ${named} ORDER BY 1, 2, 3, 4`),
    streams: all(`SELECT s.code, last_tai_s, last_ps FROM site_streams AS t ${named} ORDER BY 1`),
  };
}

async function filled(
  batches: readonly (readonly (readonly [string, SiteRecord])[])[],
  areTogether: boolean,
): Promise<Record<string, unknown[]>> {
  const at = newIngest(smallNetwork());
  const sent: Promise<unknown>[] = [];
  for (const batch of batches)
    for (const site of SITES) {
      const records = batch.flatMap(([of, one]) => (of === site ? [one] : []));
      const answered = at.send(site, ...records);
      sent.push(answered);
      if (!areTogether) await answered;
    }
  await Promise.all(sent);
  expect(at.faults).toEqual([]);
  expect(checkConservation(at.db)).toEqual([]);
  const found = tables(at);
  at.close();
  return found;
}

describe('the tables of a stream', () => {
  it('are the same after any order, split, repetition and interleaving', async () => {
    const streams = fc.array(anyRecord, { minLength: 1, maxLength: 30 }).chain((records) =>
      fc.record({
        records: fc.constant(records),
        shuffled: fc.shuffledSubarray(records, { minLength: records.length }),
        size: fc.integer({ min: 1, max: 10 }),
        areTogether: fc.boolean(),
      }),
    );
    await fc.assert(
      fc.asyncProperty(streams, async ({ records, shuffled, size, areTogether }) => {
        const parts = Array.from({ length: Math.ceil(shuffled.length / size) }, (_, k) => shuffled.slice(k * size, (k + 1) * size));
        expect(await filled(parts, areTogether)).toEqual(await filled([records], true));
      }),
      { numRuns: RUNS },
    );
  });

  it('are the same when everything is sent a second time, but for what counts that it was known', async () => {
    await fc.assert(
      fc.asyncProperty(fc.array(anyRecord, { minLength: 1, maxLength: 20 }), async (records) => {
        const once = await filled([records], true);
        const twice = await filled([records, records], false);
        const uncounted = (rows: unknown[]): unknown[] => rows.map((row) => ({ ...(row as object), received: 0, known: 0 }));
        expect({ ...twice, series: uncounted(twice['series']!) }).toEqual({ ...once, series: uncounted(once['series']!) });
      }),
      { numRuns: RUNS },
    );
  });
});

describe('a control', () => {
  it('sees tables that differ by one record', async () => {
    const one = ['A', record()] as const;
    expect(await filled([[one]], true)).not.toEqual(await filled([[one, ['A', record({ sequence: '2' })]]], true));
  });
});
