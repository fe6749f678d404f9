/** What the server says of itself and its database. */
export interface Health {
  /** The server's version. */
  readonly version: string;
  /** How many migrations the database has been through. */
  readonly migrations: number;
  /** When the database was made: UTC, ISO 8601, by the server's clock. */
  readonly createdAt: string;
}

/** Reads the answer of `GET /api/health`, and throws where it is not one. */
export function readHealth(body: unknown): Health {
  const { version, migrations, deployment } = fields(body);
  const { createdAt } = fields(deployment);
  if (typeof version !== 'string' || typeof migrations !== 'number' || typeof createdAt !== 'string')
    throw new Error('version, migrations and deployment.createdAt are needed');
  return { version, migrations, createdAt };
}

/** The sentence and the id of an RFC 9457 problem, as far as the answer of a failed request is one. */
export function readProblem(body: unknown): { readonly detail?: string; readonly id?: string } {
  const { detail, id } = fields(body);
  return { ...(typeof detail === 'string' && { detail }), ...(typeof id === 'string' && { id }) };
}

const fields = (value: unknown): Readonly<Record<string, unknown>> => (typeof value === 'object' && value !== null ? { ...value } : {});
