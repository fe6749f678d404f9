import * as z from 'zod';
import { type Outcome, valueOf } from '../outcome';
import { firstProblem } from './first-problem';
import { numberThat, oneOf, text } from './leaves';

const healthSchema = z.object(
  {
    status: oneOf('ok'),
    /** The server's version. */
    version: text('a text'),
    database: oneOf('answers'),
    /** How many migrations the database has been through. */
    migrations: numberThat('a whole number, 0 or more', (value) => Number.isInteger(value) && value >= 0),
    deployment: z.object(
      {
        /** When the database was made, by the server's clock. */
        createdAt: text('a time in UTC, as ISO 8601'),
      },
      { error: 'an object { }' },
    ),
  },
  { error: 'an object { }' },
);

/** What `GET /api/health` answers while the server and its database do. */
export type HealthAnswer = z.infer<typeof healthSchema>;

/**
 * Reads the answer of `GET /api/health`; fields that it does not know are left out.
 *
 * @param body what came, as JSON
 * @returns the answer; or the problem `health-form` with the path of the first field that is not as it must be
 */
export function parseHealthAnswer(body: unknown): Outcome<HealthAnswer> {
  const result = healthSchema.safeParse(body);
  return result.success ? valueOf(result.data) : firstProblem(result.error, body, 'health-form');
}
