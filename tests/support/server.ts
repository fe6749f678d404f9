import { type ChildProcess, spawn } from 'node:child_process';
import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { root } from '../../scripts/lib.mjs';

const START_MS = 20_000;

/** What production cannot start without. */
export const PRODUCTION = {
  NODE_ENV: 'production',
  TLS: 'proxy',
  PUBLIC_ORIGIN: 'https://skewline.example',
  SMTP_URL: 'smtp://127.0.0.1:9',
  SESSION_SECRET: 'a secret that is long enough for a test',
} as const;

/** How a process ended and what it had said. */
export interface Ended {
  readonly code: number | null;
  readonly signal: NodeJS.Signals | null;
  readonly stdout: string;
  readonly stderr: string;
}

/** A server process as people run it. */
export interface RunningServer {
  readonly url: string;
  readonly process: ChildProcess;
  readonly ended: Promise<Ended>;
  /** What it has said on stdout so far. */
  readonly said: () => string;
  /** Asks it to end and waits until it has. */
  stop(signal?: NodeJS.Signals): Promise<Ended>;
}

/** Starts the built server with only the given variables beside PATH, and gives the process and its end. */
export function runServer(env: Readonly<Record<string, string>>): { process: ChildProcess; ended: Promise<Ended>; said: () => string } {
  if (!existsSync(join(root, 'dist/frontend/browser/index.html'))) throw new Error('the front end is not built: run npm run build first');
  const child = spawn(process.execPath, ['dist/backend/main.js'], {
    cwd: root,
    env: { PATH: process.env['PATH'], NODE_ENV: 'test', ...env },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  let stdout = '';
  let stderr = '';
  child.stdout.setEncoding('utf8').on('data', (text: string) => (stdout += text));
  child.stderr.setEncoding('utf8').on('data', (text: string) => (stderr += text));
  const ended = new Promise<Ended>((resolve) => {
    child.once('close', (code, signal) => {
      resolve({ code, signal, stdout, stderr });
    });
  });
  return { process: child, ended, said: () => stdout };
}

/** Starts the built server on a free port and waits for its URL: `mostMs` at most, since a large database is looked through first. */
export async function startServer(env: Readonly<Record<string, string>>, mostMs = START_MS): Promise<RunningServer> {
  const { process: child, ended, said } = runServer({ PORT: '0', ...env });
  const url = await new Promise<string>((resolve, reject) => {
    const timer = setTimeout(() => {
      child.kill('SIGKILL');
      reject(new Error(`the server named no URL in ${mostMs} ms`));
    }, mostMs);
    const look = (): void => {
      const found = /http:\/\/\S+\//.exec(said());
      if (!found) return;
      clearTimeout(timer);
      resolve(found[0]);
    };
    child.stdout?.on('data', look);
    void ended.then(({ code, stderr }) => {
      clearTimeout(timer);
      reject(new Error(`the server ended with ${code ?? 'a signal'}: ${stderr}`));
    });
  });
  return {
    url,
    process: child,
    ended,
    said,
    stop: (signal = 'SIGTERM') => {
      child.kill(signal);
      return ended;
    },
  };
}
