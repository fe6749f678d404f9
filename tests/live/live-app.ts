import { io, type Socket } from 'socket.io-client';
import { expect } from 'vitest';
import {
  LIVE_ANSWERS,
  LIVE_NEWS,
  type LiveAnswers,
  type LiveNews,
  type LiveNewsName,
  type LiveRequestName,
} from '#shared/contract/live-socket';
import { type SiteRecord } from '#shared/contract/site-record';
import { startApp, type RunningApp } from '../support/app';
import { type Client } from '../support/client';
import { insertNetwork, insertRow, type NetworkRows } from '../support/network-rows';
import { signIn } from '../support/sign-in';
import { smallNetwork } from '../support/small-network';

const AT = '2026-03-01T00:00:00.000Z';

/** The application with a network of three sites and a light-time rule, whose records go the way of all records but for the sites' socket. */
export interface LiveApp extends RunningApp {
  readonly network: NetworkRows;
  readonly siteId: (code: string) => number;
  /** Sends the next records of a site as one batch, 100 ms of event time apart. */
  readonly send: (code: string, count?: number) => Promise<unknown>;
  /** All that is in force: the ids of events, and the ids of coincidences with their states. */
  readonly truth: () => Standing;
}

export interface Standing {
  readonly events: readonly number[];
  readonly coincidences: readonly string[];
}

export async function startLiveApp(unsentBytes?: Parameters<typeof startApp>[1]): Promise<LiveApp> {
  const app = await startApp({}, unsentBytes);
  const { db } = app.ground;
  const network = insertNetwork(db, smallNetwork());
  const ruleId = insertRow(db, 'rules', { network_id: network.networkId, code: 'light2', name: '', is_active: 1, created_at: AT });
  insertRow(db, 'rule_versions', {
    rule_id: ruleId,
    number: 1,
    minimum_fold: 2,
    sigmas: 3,
    window_kind: 'light-time',
    speed_c: 1,
    margin_ns: 0,
    created_at: AT,
  });
  const siteId = (code: string): number => network.siteIds.get(code)!;
  const sent = new Map<string, number>();
  const pluck = <T>(query: string): T[] => db.$client.prepare<[], T>(query).pluck().all();
  return Object.assign(app, {
    network,
    siteId,
    send: (code: string, count = 1) => {
      const first = (sent.get(code) ?? 0) + 1;
      sent.set(code, first + count - 1);
      const records = Array.from({ length: count }, (_, at) => recordOf(first + at));
      return app.writer.ask('site:batch', { sender: { keyId: 1, siteId: siteId(code), networkId: network.networkId }, records });
    },
    truth: () => ({
      events: pluck<number>('SELECT trigger_id FROM events ORDER BY trigger_id'),
      coincidences: pluck<string>("SELECT id || ' ' || state FROM coincidences WHERE is_current = 1 ORDER BY id"),
    }),
  });
}

/** Readings of equal numbers lie at the same instant at all sites, and so make a coincidence; those of the next are farther than light goes. */
function recordOf(sequence: number): SiteRecord {
  const reading = new Date(Date.parse('2026-03-01T00:00:00Z') + sequence * 100).toISOString().slice(0, -1);
  return { series: '', sequence: String(sequence), kind: '', reading, readingForm: 'iso', sigmaNs: '10', amplitude: '' };
}

export const analystOf = (app: LiveApp): Client => signIn(app, [{ role: 'analyst', networkId: app.network.networkId, siteId: null }]);

export const operatorOf = (app: LiveApp, code: string): Client =>
  signIn(app, [{ role: 'operator', networkId: app.network.networkId, siteId: app.siteId(code) }]);

/** A browser's socket with the cookies of a client; not linked yet. */
export function browserSocket({ url }: Pick<RunningApp, 'url'>, client: Client, headers: Readonly<Record<string, string>> = {}): Socket {
  const cookie = [...client.cookies].map(([name, value]) => `${name}=${value}`).join('; ');
  return io(url, {
    path: '/live',
    transports: ['websocket'],
    reconnection: false,
    forceNew: true,
    autoConnect: false,
    extraHeaders: { origin: url, cookie, ...headers },
  });
}

/** Links it; gives the error where that is refused. */
export const linking = (socket: Socket): Promise<(Error & { data?: unknown }) | undefined> =>
  new Promise((resolve) => {
    socket.once('connect', () => resolve(undefined));
    socket.once('connect_error', resolve);
    socket.connect();
  });

/** A browser that is linked. */
export async function linked(app: Pick<RunningApp, 'url'>, client: Client): Promise<Socket> {
  const socket = browserSocket(app, client);
  expect(await linking(socket)).toBeUndefined();
  return socket;
}

/** Asks something, and holds the answer to the contract. */
export async function ask<K extends LiveRequestName>(socket: Socket, name: K, asked: object): Promise<LiveAnswers[K]> {
  const given: unknown = await socket.timeout(10_000).emitWithAck(name, asked);
  return LIVE_ANSWERS[name].parse(given) as LiveAnswers[K];
}

/** Hears news, each held to the contract. */
export function hear<K extends LiveNewsName>(socket: Socket, name: K, listener: (news: LiveNews[K]) => void): void {
  const event: string = name;
  socket.on(event, (given: unknown) => listener(LIVE_NEWS[name].parse(given) as LiveNews[K]));
}

/** The next news of a kind that are as they are wanted. */
export const heard = <K extends LiveNewsName>(
  socket: Socket,
  name: K,
  is: (news: LiveNews[K]) => boolean = () => true,
): Promise<LiveNews[K]> => new Promise((resolve) => hear(socket, name, (news) => is(news) && resolve(news)));

export const ended = (socket: Socket): Promise<string> => new Promise((resolve) => socket.once('disconnect', resolve));

/** Waits until something holds. */
export async function until(holds: () => boolean, what: string, mostMs = 10_000): Promise<void> {
  const endMs = Date.now() + mostMs;
  while (!holds()) {
    if (Date.now() > endMs) throw new Error(`${what} did not come within ${mostMs} ms`);
    await new Promise((resolve) => setTimeout(resolve, 10));
  }
}
