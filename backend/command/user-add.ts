import { pino } from 'pino';
import type * as z from 'zod';
import { firstProblem } from '#shared/contract/first-problem';
import { email, personName } from '#shared/contract/people';
import { record } from '#shared/contract/leaves';
import { inviteFirstCoordinator } from '../accounts/first-coordinator';
import { Refusal } from '../api/refusal';
import { auditHeadIn } from '../audit/audit-head';
import { readConfig } from '../config';
import { openForCommand, UnusableDatabase } from '../db';
import { originOf } from '../make-ground';
import { UsageProblem } from './usage-problem';

const given = record({ email: email(), name: personName() });

/**
 * Lets the first coordinator of a deployment in: prints the link at which they choose a password, good for 72 hours and once. A server may
 * run meanwhile: the command then only adds rows, in its turn.
 *
 * @param person as typed
 * @param env the environment's variables, which the server reads too
 * @param print takes the link
 * @throws UsageProblem when a field or the configuration cannot be used, or a coordinator is there already
 */
export function addUser(
  person: Readonly<Record<string, string>>,
  env: Readonly<Record<string, string | undefined>>,
  print: (line: string) => void,
): void {
  const config = readConfig(env);
  if (!config.ok) throw new UsageProblem(config.problem.text);
  const { data, error } = given.safeParse(person);
  if (!data) throw new UsageProblem(sentence(error, person));
  const { dataDir, port } = config.value;
  const { db, close } = openOrRefuse(dataDir);
  try {
    const ground = {
      db,
      log: pino({ level: 'silent' }),
      nowMs: Date.now,
      auditHead: auditHeadIn(dataDir),
      origin: originOf(config.value, port),
    };
    const link = inviteFirstCoordinator(ground, data.email, data.name);
    if (link === undefined) throw new UsageProblem('a coordinator of the deployment has signed up already: they invite everyone else.');
    print(link);
  } catch (fault) {
    throw fault instanceof Refusal ? new UsageProblem(fault.message) : fault;
  } finally {
    close();
  }
}

function sentence(error: z.core.$ZodError, person: unknown): string {
  const { where, text } = firstProblem(error, person, 'usage').problem;
  return `--${where} ${text}`;
}

function openOrRefuse(dataDir: string) {
  try {
    return openForCommand(dataDir);
  } catch (fault) {
    throw fault instanceof UnusableDatabase ? new UsageProblem(fault.message) : fault;
  }
}
