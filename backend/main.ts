import { createServer, type Server } from 'node:http';
import { type AddressInfo } from 'node:net';
import { pino } from 'pino';
import { hasPeople } from './accounts/people-rows';
import { makeApp } from './app';
import { readConfig, type Config } from './config';
import { type DataLock } from './data-lock';
import { holdDataDir, openReading, UnusableDatabase } from './db';
import { showDemo } from './demo/show-demo';
import { faultText } from './command/fault-text';
import { type Ground } from './ground';
import { openLive, type LiveServer } from './live/live-server';
import { makeReadingGround } from './make-reading-ground';
import { frontendFolder } from './paths';
import { openSitesGate, type SitesGate } from './sites-gate/sites-gate';
import { writerDesk } from './sites-gate/writer-desk';
import { serverLog } from './server-log';
import { answerWhileStarting } from './starting';
import { VERSION } from './version';
import { type Writer } from './writer/questions';
import { startWriterThread } from './writer/writer-thread';

const HEADERS_TIMEOUT_MS = 10_000;
const REQUEST_TIMEOUT_MS = 30_000;
const LOOK_FOR_LATE_MS = 1_000;
const FINISH_MS = 3_000; // what requests in flight may take once the server is told to end
const END_MS = 4_500; // by when it has ended whatever happens; whoever started it may count on 5 s
const UNUSABLE = 2;
const FAILED = 1;

/** Ends the process for what its user can mend: one line, and a status of its own. */
function refuse(text: string): never {
  process.stderr.write(`skewline: ${text}\n`);
  process.exit(UNUSABLE);
}

process.umask(0o077); // whatever is written is the owner's alone
const read = readConfig(process.env);
const config: Config = read.ok ? read.value : refuse(read.problem.text);
const log = serverLog(config.logLevel, pino.destination({ dest: 2, sync: true }));

let ending = false;
let lock: DataLock | undefined;
let writer: Writer | undefined;
let endDemo: (() => void) | undefined;
let ground: Ground | undefined;
let live: LiveServer | undefined;
let sitesGate: SitesGate | undefined;
// The port is taken before the database is touched: another server that holds it may be using the same one.
const server = createServer({
  headersTimeout: HEADERS_TIMEOUT_MS,
  requestTimeout: REQUEST_TIMEOUT_MS,
  connectionsCheckingInterval: LOOK_FOR_LATE_MS,
});
server.on('error', (fault) => refuse(listenFault(fault)));
// A connection that was busy when the server was told to end is not kept for another request.
server.on('request', ({ socket }, res) => res.once('close', () => ending && socket.end()));
const takeOver = answerWhileStarting(server, log);
server.listen(config.port, config.host, () => void begin().catch(fail));

async function begin(): Promise<void> {
  lock = orRefuse(() => holdDataDir(config.dataDir));
  const { port } = server.address() as AddressInfo;
  const started = await startWriterThread({ config, version: VERSION, port }, breakDown);
  if (!started.ok) refuse(started.problem.text);
  writer = started.value.writer;
  const db = openReading(config.dataDir); // only now: the writer brings the tables up to date
  ground = makeReadingGround({ config, db, log, version: VERSION, port, nowMs: Date.now }, started.value.facts, writer);
  takeOver();
  server.on('request', makeApp(ground, frontendFolder, writer));
  live = openLive(server, ground, writer); // after the application, whose answers it leaves in place
  sitesGate = openSitesGate(server, ground, writerDesk(writer));
  const say = (text: string): void => void process.stdout.write(text);
  say(`Skewline is at ${urlOf(server)}\n`);
  const { dataDir, demo } = config;
  if (demo) endDemo = showDemo({ dataDir, deploymentId: ground.deploymentId, db, url: urlOf(server), say });
  else if (!hasPeople(db)) say('Nobody can sign in yet: npx skewline user add --email ... --name ... lets the first coordinator in.\n');
}
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) process.on(signal, end);

/** Ends the process for what nobody foresaw at the start: one line, and the rest in the log for whoever asks for it. */
function fail(fault: unknown): never {
  log.debug({ err: fault }, 'the server did not start');
  process.stderr.write(`skewline: ${faultText(fault)}\n`);
  process.exit(FAILED);
}

/** Without its writer the server must not go on: what was asked of it has no answer, and whoever asks again finds the truth. */
function breakDown(fault: unknown): never {
  log.fatal({ err: fault }, 'the writer broke down');
  process.exit(FAILED);
}

function orRefuse<T>(open: () => T): T {
  try {
    return open();
  } catch (fault) {
    if (fault instanceof UnusableDatabase) refuse(fault.message);
    throw fault;
  }
}

function listenFault({ code }: NodeJS.ErrnoException): string {
  const { port, host } = config;
  if (code === 'EADDRINUSE') return `PORT=${port} is taken on ${host}: set PORT to a free one, or to 0 for any.`;
  if (code === 'EACCES') return `PORT=${port} is not open to this user: set PORT to one from 1024 to 65535.`;
  return `HOST=${JSON.stringify(host)} cannot be listened on (${code ?? 'unknown fault'}): it must be an address or name of this machine.`;
}

function urlOf(listening: Server): string {
  const { address, port, family } = listening.address() as AddressInfo;
  const everywhere = address === '0.0.0.0' || address === '::';
  return `http://${everywhere ? 'localhost' : family === 'IPv6' ? `[${address}]` : address}:${port}/`;
}

function end(): void {
  if (ending) return;
  ending = true;
  endDemo?.();
  setTimeout(() => {
    log.error('the server did not end in time');
    process.exit(FAILED);
  }, END_MS).unref();
  setTimeout(() => server.closeAllConnections(), FINISH_MS).unref();
  // Its sockets hold the server open until it has ended them.
  void sitesGate?.close();
  live?.close(); // the server closes once every link has ended
  server.close(() => void close());
}

async function close(): Promise<void> {
  // The readers first: the last to close, which must be the writer, takes the write-ahead log away.
  await ground?.searcher.close();
  ground?.db.$client.close();
  await writer?.close();
  lock?.release();
  process.exit(0);
}
