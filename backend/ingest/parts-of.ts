import { type Db } from '../db';
import { type IngestParts } from './ingest';

const partsByDb = new WeakMap<Db, IngestParts>();

/** Makes the ingest of a writing connection known to the routes that decide on set-asides. */
export const keepParts = (db: Db, parts: IngestParts): unknown => partsByDb.set(db, parts);

/** What decisions on set-asides stand on: the parts of the ingest that writes by this connection. */
export function partsOf(db: Db): IngestParts {
  const parts = partsByDb.get(db);
  if (!parts) throw new Error('a set-aside can be decided where the ingest is open, and nowhere else');
  return parts;
}
