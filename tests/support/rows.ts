import { type Db } from '../../backend/db';

/** Every row of every table, to tell whether anything changed. */
export function allRows(db: Db): Record<string, unknown[]> {
  const names = db.$client.prepare<[], string>("SELECT name FROM sqlite_schema WHERE type = 'table' ORDER BY name").pluck().all();
  return Object.fromEntries(names.map((name) => [name, db.$client.prepare(`SELECT * FROM "${name}"`).all()]));
}
