import { spawn } from 'node:child_process';
import { type Db } from '../db';
import { demoFeedFile } from '../paths';
import { readDemoFile } from './demo-file';
import { greeting } from './greeting';

/** Of which server the demo is shown. */
export interface Shown {
  readonly dataDir: string;
  readonly deploymentId: string;
  readonly db: Pick<Db, 'select'>;
  /** Where it is reached from this machine. */
  readonly url: string;
  /** Takes text for whoever started the server. */
  readonly say: (text: string) => void;
}

/**
 * Shows the demo of a data folder, when it has one: says who can sign in, and lets its sites stream by a process of their own.
 *
 * @returns ends the process; it also ends with this one, however that ends
 */
export function showDemo({ dataDir, deploymentId, db, url, say }: Shown): () => void {
  const demo = readDemoFile(dataDir);
  if (demo?.deploymentId !== deploymentId) return () => undefined;
  say(greeting(demo, db));
  const feed = spawn(process.execPath, ['--enable-source-maps', demoFeedFile, url, dataDir], { stdio: ['pipe', 'ignore', 'inherit'] });
  feed.on('error', (fault) => process.stderr.write(`skewline: the demo does not stream: ${fault.message}\n`));
  return () => void feed.kill('SIGTERM');
}
