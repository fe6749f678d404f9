import { setFlagsFromString } from 'node:v8';
import { runInNewContext } from 'node:vm';
import { type Socket } from 'socket.io-client';
import { analystOf, ask, linked, type LiveApp } from './live-app';

const BATCH = 900;
const MB = 1e6;
const ASKED = 40;

/**
 * How much more memory the server holds once browsers have stopped and the network goes on, in MB: heap and buffers after a collection, which
 * is what grows without a bound where nobody looks.
 *
 * @param browsers how many follow and then read nothing
 * @param batches of 900 records, each some 220 kB as a message
 */
export async function memoryOfStopped(app: LiveApp, browsers: number, batches: number): Promise<number> {
  setFlagsFromString('--expose-gc');
  const collect = runInNewContext('gc') as () => void;
  const heldMb = (): number => {
    collect();
    const { heapUsed, external } = process.memoryUsage();
    return (heapUsed + external) / MB;
  };
  const client = analystOf(app);
  const sockets: Socket[] = [];
  const { networkId } = app.network;
  for (let at = 0; at < browsers; at++) {
    const socket = await linked(app, client);
    await ask(socket, 'network:follow', { networkId });
    sockets.push(socket);
  }
  for (let batch = 0; batch < 3; batch++) await app.send('A', BATCH);
  const before = heldMb();
  for (const { io } of sockets) (io.engine.transport as unknown as { ws: { _socket: { pause: () => void } } }).ws._socket.pause();
  let most = 0;
  for (let batch = 0; batch < batches; batch++) {
    await app.send('A', BATCH);
    if (batch % 10 === 9) most = Math.max(most, heldMb() - before);
  }
  // What they go on asking for is written for each of them alone, while the messages above are one for all.
  for (let times = 0; times < ASKED; times++) {
    for (const socket of sockets) socket.emit('network:missed', { networkId, after: 0 }, () => undefined);
    await new Promise((resolve) => setTimeout(resolve, 20));
    if (times % 10 === 9) most = Math.max(most, heldMb() - before);
  }
  for (const socket of sockets) socket.io.engine.close();
  return most;
}
