import { provideHttpClient } from '@angular/common/http';
import { HttpTestingController, provideHttpClientTesting } from '@angular/common/http/testing';
import { provideZonelessChangeDetection, signal } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { type NetworkChanges } from '#shared/contract/live-changes';
import { type LiveRequestName } from '#shared/contract/live-socket';
import { ConnectionStore } from '../connection/connection-store';
import { NetworkStore } from '../networks/network-store';
import { SessionStore } from '../session/session-store';
import { LiveStore } from './live-store';
import { OPEN_LIVE_SOCKET, type SocketListener } from './live-socket';

const states = (change: number) => ({ networkId: 1, change, atMs: 50_000, completeTo: { taiS: 40, ps: 0 }, sites: [] });
const changesOf = (from: number, to: number): NetworkChanges => ({
  kind: 'changes',
  networkId: 1,
  from,
  to,
  atMs: 0,
  events: { items: [], gone: [], isCut: false },
  coincidences: { items: [], ended: [], final: [], crowded: 0, isCut: false },
  completeTo: { taiS: to, ps: 0 },
  completeness: [],
  setAsides: [],
  decided: [],
  hints: [],
});

/** A server that answers what the test says. */
class FakeServer {
  listener: SocketListener | undefined;
  links = 0;
  isClosed = false;
  last = 10;
  isKept = true;
  readonly asked: string[] = [];

  readonly open = (listener: SocketListener) => {
    this.listener = listener;
    return Promise.resolve({
      link: () => {
        this.links++;
      },
      ask: (name: LiveRequestName, asked: object): Promise<never> => Promise.resolve(this.answer(name, asked) as never),
      close: () => void (this.isClosed = true),
    });
  };

  private answer(name: LiveRequestName, asked: object): unknown {
    const after: unknown = Reflect.get(asked, 'after');
    this.asked.push(`${name} ${String(after)}`);
    if (name === 'network:follow') return { ok: true, last: this.last, oldest: 1, isKept: this.isKept, states: states(this.last) };
    return { ok: true, changes: changesOf(Number(after) + 1, this.last), last: this.last };
  }
}

describe('the live store', () => {
  let server: FakeServer;
  let store: LiveStore;
  let told: string[];
  const me = signal<object | undefined>({ id: 3 });
  const network = signal<object | undefined>({ id: 1 });
  const turn = (): Promise<unknown> => vi.advanceTimersByTimeAsync(1);

  beforeEach(async () => {
    vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout', 'setInterval', 'clearInterval', 'Date', 'performance'] });
    server = new FakeServer();
    told = [];
    me.set({ id: 3 });
    network.set({ id: 1 });
    TestBed.configureTestingModule({
      providers: [
        provideZonelessChangeDetection(),
        provideHttpClient(),
        provideHttpClientTesting(),
        { provide: OPEN_LIVE_SOCKET, useValue: server.open },
        { provide: SessionStore, useValue: { me } },
        { provide: NetworkStore, useValue: { network } },
      ],
    });
    store = TestBed.inject(LiveStore);
    store.changes.subscribe(({ from, to }) => told.push(`${from}-${to}`));
    store.anew.subscribe(() => told.push('anew'));
    TestBed.tick();
    await turn();
  });
  afterEach(() => vi.useRealTimers());

  const linked = async (): Promise<void> => {
    server.listener?.linked();
    await turn();
  };
  const news = (from: number, to: number): void => server.listener?.news({ name: 'network:changed', news: changesOf(from, to) });

  it('links for who is signed in, follows the network, and tells what comes', async () => {
    expect([store.phase(), server.links]).toEqual(['connecting', 1]);
    await linked();
    news(11, 12);
    expect([store.phase(), store.number(), told]).toEqual(['live', 12, ['anew', '11-12']]);
    expect(store.completeTo()).toEqual({ taiS: 12, ps: 0 });
  });

  it('asks for what a message shows to be missing, and is catching up meanwhile', async () => {
    await linked();
    server.last = 15;
    news(15, 15);
    expect(store.phase()).toBe('catching-up');
    await turn();
    expect([store.phase(), told]).toEqual(['live', ['anew', '11-15']]);
  });

  it('links again after the link was lost, not sooner than in two seconds, and goes on from what it had', async () => {
    await linked();
    news(11, 12);
    server.listener?.unlinked(undefined);
    TestBed.inject(HttpTestingController)
      .match('/api/health')
      .forEach((request) => request.error(new ProgressEvent('error')));
    expect(store.phase()).toBe('offline');
    await vi.advanceTimersByTimeAsync(1_900);
    expect(server.links).toBe(1);
    await vi.advanceTimersByTimeAsync(1_200);
    expect(server.links).toBe(2);
    server.last = 20;
    await linked();
    expect(server.asked).toEqual(['network:follow undefined', 'network:follow 12', 'network:missed 12']);
    expect([store.phase(), told]).toEqual(['live', ['anew', '11-12', '13-20']]);
  });

  it('says that all is to be read anew where what it had can no longer be gone on from', async () => {
    await linked();
    server.listener?.unlinked(undefined);
    await vi.advanceTimersByTimeAsync(3_100);
    server.last = 90_000;
    server.isKept = false;
    await linked();
    expect([store.number(), told]).toEqual([90_000, ['anew', 'anew']]);
  });

  it('begins anew where what may be seen has changed', async () => {
    await linked();
    server.listener?.news({ name: 'network:ended', news: { networkId: 1, text: 'changed' } });
    await turn();
    expect(told).toEqual(['anew', 'anew']);
    expect(server.asked).toEqual(['network:follow undefined', 'network:follow undefined']);
  });

  it('tells the top bar how old the data are and up to when they are complete', async () => {
    await linked();
    expect(TestBed.inject(ConnectionStore).stream()).toMatchObject({ state: 'quiet', completeUpTo: { taiS: 40, ps: 0 } });
  });

  it('lets the link go when nobody is signed in any more', async () => {
    await linked();
    me.set(undefined);
    TestBed.tick();
    await turn();
    expect([store.phase(), server.isClosed, store.number()]).toEqual(['off', true, undefined]);
  });
});
