import * as z from 'zod';
import { type Outcome, valueOf } from '../outcome';
import { firstProblem } from './first-problem';
import { numberThat, oneOf, record, text } from './leaves';

const deployment = record({
  /** When the database was made, by the server's clock: UTC, to the millisecond. */
  createdAt: z.iso.datetime({ precision: 3, error: 'a time in UTC, as ISO 8601' }),
});

/** What `GET /api/health` answers while the server and its database do: these fields and no others. */
export const healthAnswer = record({
  status: oneOf('ok'),
  /** The server's version. */
  version: text('a text'),
  database: oneOf('answers'),
  /** How many migrations the database has been through. */
  migrations: numberThat('a whole number, 0 or more', (value) => Number.isInteger(value) && value >= 0),
  deployment,
});

export type HealthAnswer = z.infer<typeof healthAnswer>;

/** The same to a page that was loaded before its server was renewed. */
const healthOfNewer = healthAnswer.strip().extend({ deployment: deployment.strip() });

/**
 * Reads the answer of `GET /api/health`; fields that it does not know are left out.
 *
 * @param body what came, as JSON
 * @returns the answer; or the problem `health-form` with the path of the first field that is not as it must be
 */
export function parseHealthAnswer(body: unknown): Outcome<HealthAnswer> {
  const result = healthOfNewer.safeParse(body);
  return result.success ? valueOf(result.data) : firstProblem(result.error, body, 'health-form');
}
