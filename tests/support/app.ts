import { createServer } from 'node:http';
import { type AddressInfo } from 'node:net';
import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { makeApp } from '../../backend/app';
import { type Config, readConfig } from '../../backend/config';
import { openReading } from '../../backend/db';
import { type Ground } from '../../backend/ground';
import { openLive } from '../../backend/live/live-server';
import { makeReadingGround } from '../../backend/make-reading-ground';
import { serverLog } from '../../backend/server-log';
import { type Writer } from '../../backend/writer/questions';
import { writerInPlace } from '../../backend/writer/writer-in-place';
import { newFolder } from './folder';

/** The application over a real socket, with a real database file and a real mail server, and a clock that can be put forward. */
export interface RunningApp {
  readonly url: string;
  readonly dataDir: string;
  /** The writer's. */
  readonly ground: Ground;
  readonly writer: Writer;
  /** The lines of its log so far. */
  readonly log: Record<string, unknown>[];
  /** The same, as they were written. */
  readonly rawLog: () => string;
  readonly forwardMs: (ms: number) => void;
  readonly close: () => Promise<void>;
}

/** Starts the application as `main` does, in this process and thread; `unsentBytes` for browsers that may leave more unread. */
export async function startApp(changed: Partial<Config> = {}, unsentBytes?: Parameters<typeof openLive>[3]): Promise<RunningApp> {
  const dataDir = newFolder('app');
  const read = readConfig({ DATA_DIR: dataDir, NODE_ENV: 'test' });
  if (!read.ok) throw new Error(read.problem.text);
  const config = { ...read.value, ...changed };
  const lines: string[] = [];
  const log = serverLog('debug', { write: (line: string) => void lines.push(line) });
  let aheadMs = 0;
  const server = createServer();
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const { port } = server.address() as AddressInfo;
  const sources = { config, log, version: '0.0.0', port, nowMs: () => Date.now() + aheadMs };
  const begun = await writerInPlace(sources);
  if (!begun.ok) throw new Error(begun.problem.text);
  const { ground, writer } = begun.value;
  const db = openReading(dataDir);
  const reading = makeReadingGround({ ...sources, db }, ground, writer);
  server.on('request', makeApp(reading, pageFolder(dataDir), writer));
  const live = openLive(server, reading, writer, unsentBytes);
  return {
    url: `http://127.0.0.1:${port}`,
    dataDir,
    ground,
    writer,
    get log() {
      return lines.map((line) => JSON.parse(line) as Record<string, unknown>);
    },
    rawLog: () => lines.join(''),
    forwardMs: (ms) => void (aheadMs += ms),
    close: async () => {
      live.close();
      server.closeAllConnections();
      await new Promise((resolve) => server.close(resolve));
      await reading.searcher.close();
      db.$client.close();
      await writer.close();
    },
  };
}

/** The least that counts as a built front end. */
function pageFolder(parent: string): string {
  const folder = join(parent, 'page');
  mkdirSync(folder);
  writeFileSync(join(folder, 'index.html'), '<sw-root ngCspNonce="CSP_NONCE"></sw-root>');
  return folder;
}
