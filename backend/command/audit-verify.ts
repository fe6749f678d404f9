import { auditHeadIn } from '../audit/audit-head';
import { brokenText } from '../audit/check-trail';
import { verifyAudit } from '../audit/verify';
import { readConfig } from '../config';
import { openBesideForReading, UnusableDatabase } from '../db';
import { UsageProblem } from './usage-problem';

/**
 * Checks the audit trail of a data folder, beside a server or without one; nothing is written.
 *
 * @param env the environment's variables, which the server reads too
 * @param print takes the line that says how many entries are sound
 * @throws UsageProblem when there is no database to read; an error that names the first entry that is not what was written
 */
export function verifyTrail(env: Readonly<Record<string, string | undefined>>, print: (line: string) => void): void {
  const config = readConfig(env);
  if (!config.ok) throw new UsageProblem(config.problem.text);
  const { dataDir } = config.value;
  const db = openOrRefuse(dataDir);
  try {
    const { sound, fault } = verifyAudit(db, auditHeadIn(dataDir));
    if (fault) throw new Error(`${brokenText(fault)} (${sound} entries before it are sound)`);
    print(`the audit trail is as it was written: ${sound} entries`);
  } finally {
    db.$client.close();
  }
}

function openOrRefuse(dataDir: string) {
  try {
    return openBesideForReading(dataDir);
  } catch (fault) {
    throw fault instanceof UnusableDatabase ? new UsageProblem(fault.message) : fault;
  }
}
