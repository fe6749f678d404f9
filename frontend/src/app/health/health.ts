import '../contract-settings';
import { parseHealthAnswer } from '#shared/contract/health';

/** What the server says of itself and its database. */
export interface Health {
  /** The server's version. */
  readonly version: string;
  /** How many migrations the database has been through. */
  readonly migrations: number;
  /** When the database was made: UTC, ISO 8601, by the server's clock. */
  readonly createdAt: string;
}

/** Reads the answer of `GET /api/health`, and throws where it is not one: the field, its value and what would be right. */
export function readHealth(body: unknown): Health {
  const answer = parseHealthAnswer(body);
  if (!answer.ok) throw new Error(`${answer.problem.where === '' ? 'the answer' : answer.problem.where} ${answer.problem.text}`);
  const { version, migrations, deployment } = answer.value;
  return { version, migrations, createdAt: deployment.createdAt };
}

/** The sentence and the id of an RFC 9457 problem, as far as the answer of a failed request is one. */
export function readProblem(body: unknown): { readonly detail?: string; readonly id?: string } {
  const { detail, id } = fields(body);
  return { ...(typeof detail === 'string' && { detail }), ...(typeof id === 'string' && { id }) };
}

const fields = (value: unknown): Readonly<Record<string, unknown>> => (typeof value === 'object' && value !== null ? { ...value } : {});
