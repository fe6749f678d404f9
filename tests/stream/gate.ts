import { createServer } from 'node:http';
import { type AddressInfo } from 'node:net';
import { pino } from 'pino';
import { io, type Socket } from 'socket.io-client';
import { networks, siteKeys, sites } from '#schema/schema';
import { valueOf } from '#shared/outcome';
import { type Runs } from '#shared/contract/site-socket';
import { type SiteRecord } from '#shared/contract/site-record';
import { keepKeyUse, newSiteKey } from '../../backend/accounts/site-key-use';
import { closeDb, openDb, type Db } from '../../backend/db';
import { type GateGround, openSitesGate, type SitesGate } from '../../backend/sites-gate/sites-gate';
import { type BatchFates, type SiteDesk } from '../../backend/sites-gate/site-desk';
import { newFolder } from '../support/folder';

const AT = '2026-01-01T00:00:00.000Z';

/** A desk that keeps what comes in memory by (site, series, sequence), and can be slow, unsure or broken. */
export interface RecordingDesk extends SiteDesk {
  readonly kept: Map<string, SiteRecord>;
  readonly said: string[];
  attempts: number;
  delayMs: number;
  /** Every n-th batch is not known to be kept, although it is. */
  unsureEvery: number;
}

export function recordingDesk(): RecordingDesk {
  const kept = new Map<string, SiteRecord>();
  const runs = (rows: readonly number[]): Runs => rows.map((row) => [row, 1]);
  const desk: RecordingDesk = {
    kept,
    said: [],
    attempts: 0,
    delayMs: 0,
    unsureEvery: 0,
    hello: (_sender, software) => {
      desk.said.push(`hello ${software}`);
      return Promise.resolve({ connectionId: 1, series: [], more: false, completeTo: null });
    },
    batch: async ({ siteId }, records) => {
      desk.attempts++;
      const attempt = desk.attempts;
      if (desk.delayMs > 0) await new Promise((resolve) => setTimeout(resolve, desk.delayMs));
      const rows = { stored: [] as number[], known: [] as number[] };
      const setAside: BatchFates['setAside'][number][] = [];
      for (const [row, record] of records.entries()) {
        const name = `${siteId}:${record.series}:${record.sequence}`;
        if (record.sequence === '') setAside.push({ row, reason: 'sequence', detail: 'is empty' });
        else if (kept.has(name)) rows.known.push(row);
        else {
          kept.set(name, record);
          rows.stored.push(row);
        }
      }
      if (desk.unsureEvery > 0 && attempt % desk.unsureEvery === 0) throw new Error('the disk did not say');
      return { stored: runs(rows.stored), known: runs(rows.known), setAside, unknown: [] };
    },
    state: (_sender, state) => {
      desk.said.push(`state ${JSON.stringify(state)} after ${kept.size}`);
      return Promise.resolve(valueOf(state.completeTo ?? null));
    },
    bye: (_connectionId, why) => {
      desk.said.push(`bye ${why}`);
      return Promise.resolve();
    },
  };
  return desk;
}

/** A gate over a real socket and a real database file, with two sites and a key for each. */
export interface RunningGate {
  readonly url: string;
  readonly port: number;
  readonly db: Db;
  readonly gate: SitesGate;
  readonly ground: GateGround;
  readonly keys: readonly [string, string];
  readonly keyIds: readonly [number, number];
  readonly siteIds: readonly [number, number];
  readonly log: Record<string, unknown>[];
  /** The keys of which a use was noted, each time. */
  readonly keyUses: readonly number[];
  readonly close: () => Promise<void>;
}

/** Makes a gate over a new database with two sites, ORL and VES. */
export function startGate(desk: SiteDesk): Promise<RunningGate> {
  const db = openDb(newFolder('gate'));
  const { id: networkId } = db
    .insert(networks)
    .values({ code: 'NET', name: 'Net', originTaiS: 0, originPs: 0, createdAt: AT })
    .returning({ id: networks.id })
    .get();
  const siteOf = (code: string): number =>
    db.insert(sites).values({ code, name: code, networkId, createdAt: AT }).returning({ id: sites.id }).get().id;
  return startGateOver(db, desk, [siteOf('ORL'), siteOf('VES')]);
}

/** Makes a gate over a database that is there, with a new key for each of two sites. */
export async function startGateOver(db: Db, desk: SiteDesk, siteIds: readonly [number, number]): Promise<RunningGate> {
  const made = siteIds.map((siteId) => {
    const { key, prefix, hash } = newSiteKey();
    const { id } = db.insert(siteKeys).values({ siteId, label: 'test', prefix, hash, createdAt: AT }).returning({ id: siteKeys.id }).get();
    return { key, id };
  });
  const log: Record<string, unknown>[] = [];
  const keyUses: number[] = [];
  const server = createServer((_req, res) => res.writeHead(404).end());
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.address() as AddressInfo;
  const ground = {
    db,
    log: pino({ level: 'debug' }, { write: (line: string) => void log.push(JSON.parse(line) as Record<string, unknown>) }),
    nowMs: Date.now,
    noteKeyUse: (keyId: number) => {
      keyUses.push(keyId);
      keepKeyUse({ db, log: ground.log, nowMs: Date.now }, keyId);
    },
    origin: `http://127.0.0.1:${port}`,
    production: false,
  };
  const gate = openSitesGate(server, ground, desk);
  const [first, second] = made;
  let isClosed = false;
  return {
    url: `http://127.0.0.1:${port}`,
    port,
    db,
    gate,
    ground,
    keys: [first!.key, second!.key],
    keyIds: [first!.id, second!.id],
    siteIds,
    log,
    keyUses,
    close: async () => {
      if (isClosed) return;
      isClosed = true;
      await gate.close();
      server.closeAllConnections();
      await new Promise((resolve) => server.close(resolve));
      closeDb(db);
    },
  };
}

/** A plain link of the protocol, for tests that say what no client would. */
export function plainLink(url: string, key: unknown, extraHeaders: Record<string, string> = {}): Socket {
  return io(url, {
    path: '/site-stream',
    transports: ['websocket'],
    auth: { key },
    reconnection: false,
    forceNew: true,
    extraHeaders,
  });
}

/** What comes of connecting: undefined, or the error. */
export const connecting = (socket: Socket): Promise<(Error & { data?: unknown }) | undefined> =>
  new Promise((resolve) => {
    socket.once('connect', () => resolve(undefined));
    socket.once('connect_error', resolve);
  });

export const HELLO = { protocol: 1, software: 'test 1' } as const;

/** A link that has been welcomed. */
export async function welcomedLink(url: string, key: string): Promise<Socket> {
  const socket = plainLink(url, key);
  const fault = await connecting(socket);
  if (fault) throw fault;
  await socket.emitWithAck('stream:hello', HELLO);
  return socket;
}

export const ended = (socket: Socket): Promise<string> => new Promise((resolve) => socket.once('disconnect', resolve));

export const recordOf = (sequence: string, over: Partial<SiteRecord> = {}): SiteRecord => ({
  series: '',
  sequence,
  kind: '',
  reading: '2026-03-01T12:00:00.5',
  readingForm: 'iso',
  sigmaNs: '20',
  amplitude: '',
  ...over,
});
