import { checkRowHashes } from '../../backend/checks/row-hashes';
import { auditHeadIn } from '../../backend/audit/audit-head';
import { verifyAudit } from '../../backend/audit/verify';
import { readConfig } from '../../backend/config';
import { type Db, openDb } from '../../backend/db';
import { checkConservation } from '../../backend/ingest/conservation';
import { beginWriter } from '../../backend/writer/begin-writer';
import pino from 'pino';
import { type Acknowledged } from './power-cut-acknowledged';

/** What may be wrong with a data folder after a fault. */
export interface KeptFault {
  readonly is: 'corrupt' | 'lost' | 'unbalanced' | 'no start';
  readonly text: string;
}

const hashesIn = (db: Db): ReadonlySet<string> =>
  new Set(
    db.$client
      .prepare<[], string>(
        "SELECT site_id || ' ' || hex(content_hash) FROM triggers UNION SELECT site_id || ' ' || hex(content_hash) FROM set_asides",
      )
      .pluck()
      .all(),
  );

function lostOf(db: Db, acknowledged: readonly Acknowledged[]): readonly string[] {
  const kept = hashesIn(db);
  const lost: string[] = [];
  const isComplete = db.$client
    .prepare<[number, number, number], number>('SELECT (complete_tai_s, complete_ps) >= (?, ?) FROM site_streams WHERE site_id = ?')
    .pluck();
  const lastAudit = db.$client.prepare<[], number>('SELECT coalesce(max(seq), 0) FROM audit').pluck().get() ?? 0;
  for (const what of acknowledged) {
    if ('audited' in what) {
      if (what.audited > lastAudit) lost.push(`audit entry ${what.audited}`);
    } else if ('completeTo' in what) {
      const { taiS, ps } = what.completeTo;
      if (isComplete.get(taiS, ps, what.siteId) !== 1) lost.push(`site ${what.siteId} is complete to ${taiS}.${ps}`);
    } else
      for (const content of what.contents)
        if (!kept.has(`${what.siteId} ${content.toUpperCase()}`)) lost.push(`record ${content} of site ${what.siteId}`);
  }
  return lost;
}

/** What is wrong with an open database: what the file's own check, the hashes, the counters and the audit trail say, and what was acknowledged and is gone. */
export function faultsIn(db: Db, dataDir: string, acknowledged: readonly Acknowledged[]): readonly KeptFault[] {
  const faults: KeptFault[] = [];
  const integrity = db.$client.pragma('integrity_check', { simple: true });
  if (integrity !== 'ok') faults.push({ is: 'corrupt', text: String(integrity) });
  for (const step of checkRowHashes(db))
    for (const { table, id, text } of step.faults) faults.push({ is: 'corrupt', text: `${table} ${id} ${text}` });
  const audit = verifyAudit(db, auditHeadIn(dataDir)).fault;
  if (audit) faults.push({ is: 'corrupt', text: `audit entry ${audit.seq} ${audit.text}` });
  for (const text of lostOf(db, acknowledged)) faults.push({ is: 'lost', text });
  for (const unbalanced of checkConservation(db)) faults.push({ is: 'unbalanced', text: JSON.stringify(unbalanced) });
  return faults;
}

/** Opens a data folder as the server does, and says what is wrong with it; then begins the server's writer over it and ends it again. */
export async function faultsOf(dataDir: string, acknowledged: readonly Acknowledged[]): Promise<readonly KeptFault[]> {
  let db: Db;
  try {
    db = openDb(dataDir);
  } catch (fault) {
    return [{ is: 'corrupt', text: String(fault) }];
  }
  const faults = [...faultsIn(db, dataDir, acknowledged)];
  db.$client.close();
  const config = readConfig({ DATA_DIR: dataDir, NODE_ENV: 'test', DEMO: 'off', SMTP_URL: 'smtp://127.0.0.1:9' });
  if (!config.ok) throw new Error(config.problem.text);
  const sources = { config: config.value, log: pino({ level: 'silent' }), version: '0.0.0', port: 0, nowMs: Date.now };
  try {
    const begun = await beginWriter(sources, () => undefined);
    if (begun.ok) await begun.value.close();
    else faults.push({ is: 'no start', text: begun.problem.text });
  } catch (fault) {
    faults.push({ is: 'no start', text: String(fault) });
  }
  return faults;
}
