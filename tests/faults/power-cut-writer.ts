// A process around the server's writer, whose calls to the disk are recorded: it makes a database from nothing, streams records into it, and
// writes each acknowledgement into the file `acknowledged` of the data folder, so that it has its place among the recorded calls.
import { closeSync, openSync, writeSync } from 'node:fs';
import { join } from 'node:path';
import { argv, env, exit } from 'node:process';
import { pino } from 'pino';
import { type SiteRecord } from '#shared/contract/site-record';
import { type Instant } from '#shared/time/instant';
import { change } from '../../backend/audit/change';
import { readConfig } from '../../backend/config';
import { closeDb, openDb } from '../../backend/db';
import { contentHash } from '../../backend/ingest/hashes';
import { beginWriter } from '../../backend/writer/begin-writer';
import { type KeyedSite, makeDiskNetwork } from './disk-network';
import { type Acknowledged, ACKNOWLEDGED } from './power-cut-acknowledged';
import { recordsOf } from './records';

const SITES = 3;
const BATCH_RECORDS = 25;
const AUDITED_EVERY = 10;

async function stream(dataDir: string, batches: number, seed: number, pragma: string | undefined): Promise<void> {
  const config = readConfig({ DATA_DIR: dataDir, NODE_ENV: 'test', DEMO: 'off', SMTP_URL: 'smtp://127.0.0.1:9' });
  if (!config.ok) throw new Error(config.problem.text);
  const db = openDb(dataDir);
  const sites = makeDiskNetwork(db, SITES);
  closeDb(db);
  const log = pino({ level: 'error' });
  const begun = await beginWriter({ config: config.value, log, version: '0.0.0', port: 0, nowMs: Date.now }, () => undefined);
  if (!begun.ok) throw new Error(begun.problem.text);
  const { ground, answer, close } = begun.value;
  if (pragma !== undefined) ground.db.$client.pragma(pragma);
  const file = openSync(join(dataDir, ACKNOWLEDGED), 'a');
  const acknowledge = (what: Acknowledged): void => void writeSync(file, `${JSON.stringify(what)}\n`);

  async function streamSite(sender: KeyedSite, at: number): Promise<void> {
    const records = recordsOf(seed, at);
    await answer('site:hello', { sender, software: 'test 1' });
    for (let batch = 0; batch < batches; batch++) {
      const sent: SiteRecord[] = [];
      let completeTo: Instant | undefined;
      while (sent.length < 1 + ((batch * 7 + at * 5) % (2 * BATCH_RECORDS))) {
        const next = records.next();
        if (next.done) throw new Error('the site has no more records');
        sent.push(next.value.record);
        completeTo = next.value.completeTo;
      }
      const { unknown } = await answer('site:batch', { sender, records: sent });
      if (unknown.length > 0) throw new Error('records are unknown where no fault is planted');
      acknowledge({ siteId: sender.siteId, contents: sent.map((record) => contentHash(record).toString('hex')) });
      if (completeTo) {
        const said = await answer('site:state', { sender, state: { completeTo } });
        if (said.ok && said.value) acknowledge({ siteId: sender.siteId, completeTo: said.value });
      }
      if (batch % AUDITED_EVERY === at) {
        const actor = { kind: 'command', id: null, requestId: null } as const;
        change(ground, actor, (_tx, note) => note({ action: 'test:noted', subjectKind: 'site', subjectId: sender.siteId }));
        const audited = ground.db.$client.prepare<[], number>('SELECT max(seq) FROM audit').pluck().get() ?? 0;
        acknowledge({ audited });
      }
    }
  }

  await Promise.all(sites.map(streamSite));
  await close();
  closeSync(file);
}

const [, , dataDir = '', batches = '1', seed = '1'] = argv;
await stream(dataDir, Number(batches), Number(seed), env['PRAGMA']).catch((fault: unknown) => {
  console.error(fault);
  exit(1);
});
