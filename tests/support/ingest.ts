import { readFileSync } from 'node:fs';
import Papa from 'papaparse';
import pino from 'pino';
import { type SiteRecord } from '#shared/contract/site-record';
import { type Db, openDb } from '../../backend/db';
import { type Ingest, openIngest } from '../../backend/ingest/ingest';
import { type Stored, type StoredListener } from '../../backend/ingest/stored';
import { newFolder } from './folder';
import { insertNetwork, type NetworkRows } from './network-rows';

/** An ingest over a real database of its own, with a clock that stands where the test puts it. */
export interface IngestAtWork {
  readonly db: Db;
  readonly ingest: Ingest;
  readonly network: NetworkRows;
  readonly told: Stored[];
  readonly faults: unknown[];
  readonly clock: { nowMs: number };
  readonly siteId: (code: string) => number;
  /** Sends records of one site, as one batch. */
  readonly send: (code: string, ...records: readonly SiteRecord[]) => ReturnType<Ingest['batch']>;
  readonly close: () => void;
}

/** A day long after every record of the tests. */
export const TEST_NOW_MS = Date.parse('2026-03-02T00:00:00Z');

export function ingestOver(db: Db, network: NetworkRows, more: Partial<StoredListener> = {}): IngestAtWork {
  const told: Stored[] = [];
  const faults: unknown[] = [];
  const clock = { nowMs: TEST_NOW_MS };
  const ingest = openIngest({
    db,
    log: pino({ level: process.env['LOG'] ?? 'silent' }),
    nowMs: () => clock.nowMs,
    listener: { onStored: (stored) => told.push(stored), onInForce: () => undefined, ...more },
    fatal: (fault) => faults.push(fault),
  });
  const siteId = (code: string): number => network.siteIds.get(code)!;
  return {
    db,
    ingest,
    network,
    told,
    faults,
    clock,
    siteId,
    send: (code, ...records) => ingest.batch(siteId(code), records),
    close: () => db.$client.close(),
  };
}

/** A new database with a network as files have it. */
export function newIngest(networkFile: unknown, more: Partial<StoredListener> = {}): IngestAtWork {
  const db = openDb(newFolder('ingest'));
  return ingestOver(db, insertNetwork(db, networkFile), more);
}

/** A record with what a test says of it. */
export const record = (more: Partial<SiteRecord> = {}): SiteRecord => ({
  series: '',
  sequence: '1',
  kind: '',
  reading: '2026-03-01T12:00:00.000000001',
  readingForm: 'iso',
  sigmaNs: '',
  amplitude: '',
  ...more,
});

/** The lines of a log as records, by site; lines that name no site of their own are of `ofSite`. Lines of another width are left out. */
export function recordsOfLog(path: string, ofSite?: string): readonly (readonly [site: string, SiteRecord])[] {
  const [header = [], ...lines] = Papa.parse<string[]>(readFileSync(path, 'utf8'), { skipEmptyLines: true }).data;
  return lines
    .filter((fields) => fields.length === header.length)
    .map((fields) => {
      const columns = new Map(header.map((name, at) => [name, fields[at] ?? '']));
      const take = (name: string): string => {
        const text = columns.get(name) ?? '';
        columns.delete(name);
        return text;
      };
      const site = columns.has('site') ? take('site') : (ofSite ?? '');
      const own = {
        sequence: take('sequence'),
        series: take('series'),
        kind: take('kind'),
        reading: take('reading'),
        sigmaNs: take('sigma_ns'),
        amplitude: take('amplitude'),
      };
      const extra = [...columns].filter(([, text]) => text !== '');
      return [site, record({ ...own, ...(extra.length === 0 ? {} : { extra: Object.fromEntries(extra) }) })];
    });
}

/** The only number of a query of one column and row. */
export const count = (db: Db, query: string): number => db.$client.prepare<[], number>(query).pluck().get() ?? 0;
