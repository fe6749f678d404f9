import { type Socket } from 'socket.io-client';
import { afterEach, describe, expect, it } from 'vitest';
import { analystOf, linked, ask, startLiveApp, until, type LiveApp } from './live-app';
import { memoryOfStopped } from './stopped';
import { Viewer } from './viewer';

const MOST_MB = 50;

let app: LiveApp;
afterEach(() => app.close());

/** A page that has stopped, as in a sleeping machine: what comes stays in the network's buffers, and then at the server. */
const tcpOf = (socket: Socket): { pause: () => void; resume: () => void } =>
  (socket.io.engine.transport as unknown as { ws: { _socket: { pause: () => void; resume: () => void } } }).ws._socket;

describe('a browser that reads slowly', () => {
  it('is told in sum what it missed, asks for it, and has everything in the end', async () => {
    app = await startLiveApp();
    const viewer = new Viewer(app, analystOf(app));
    await viewer.link();
    const tcp = tcpOf(viewer.socket);
    tcp.pause();
    for (let batch = 0; batch < 40; batch++) await app.send('A', 900);
    expect(app.truth().events).toHaveLength(36_000);
    tcp.resume();
    await until(() => viewer.sums.length > 0, 'the sum');
    const [sum] = viewer.sums;
    expect(sum).toMatchObject({ kind: 'sum', coincidences: 0 });
    expect(sum?.kind === 'sum' && sum.events).toBeGreaterThan(900);
    await until(() => viewer.standing().events.length === 36_000, 'everything');
    expect(viewer.standing()).toEqual(app.truth());
    expect([viewer.faults, viewer.wholes]).toEqual([[], 1]);
    viewer.socket.disconnect();
  });

  it('is cut when it reads nothing for half a minute', async () => {
    app = await startLiveApp();
    const socket = await linked(app, analystOf(app));
    await ask(socket, 'network:follow', { networkId: app.network.networkId });
    const tcp = tcpOf(socket);
    tcp.pause();
    for (let batch = 0; batch < 40; batch++) await app.send('A', 900);
    const isCut = (): boolean => app.log.some(({ event }) => event === 'live:cut');
    await new Promise((resolve) => setTimeout(resolve, 1_000));
    expect(isCut()).toBe(false);
    app.forwardMs(31_000);
    await until(isCut, 'the cut', 2_000);
    tcp.resume();
    socket.disconnect();
  });
});

describe('20 stopped browsers', () => {
  it('cost at most 50 MB', async () => {
    app = await startLiveApp();
    expect(await memoryOfStopped(app, 20, 20)).toBeLessThan(MOST_MB);
  });

  it('would cost more without a bound on what they leave unread', async () => {
    app = await startLiveApp({ slow: Infinity, most: Infinity });
    expect(await memoryOfStopped(app, 20, 20)).toBeGreaterThan(2 * MOST_MB);
  });
});
