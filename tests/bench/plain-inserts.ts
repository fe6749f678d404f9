import Database from 'better-sqlite3';
import { closeDb, databaseFile, openDb } from '../../backend/db';

type Row = readonly (string | number | bigint | Buffer | null)[];

/** The baseline of streaming in: better-sqlite3 alone inserts the rows of triggers and events that the server has stored, into the same tables. */
export interface PlainInserts {
  /**
   * Inserts what the server has stored since the last time, in groups of the same size as the server's were.
   *
   * @returns how many triggers there were, in groups of how many, and how long it took
   */
  readonly insertNew: () => { readonly records: number; readonly perGroup: number; readonly seconds: number };
  readonly close: () => void;
}

const COMMITS = `SELECT count(*) FROM changes WHERE kind = 'records' AND json_extract(body, '$.triggers') IS NOT NULL`;

/**
 * @param fromDir the data folder that the server streams into
 * @param emptyDir a copy of it from before the first record
 */
export function plainInserts(fromDir: string, emptyDir: string): PlainInserts {
  const from = new Database(databaseFile(fromDir), { readonly: true });
  const db = openDb(emptyDir); // every commit on disk before it returns
  const { $client: into } = db;
  const columnsOf = (table: string): string[] => from.prepare<[], string>(`SELECT name FROM pragma_table_info('${table}')`).pluck().all();
  const inserting = (table: string): Database.Statement => {
    const columns = columnsOf(table);
    return into.prepare(`INSERT INTO ${table} (${columns.join(', ')}) VALUES (${columns.map(() => '?').join(', ')})`);
  };
  const triggers = inserting('triggers');
  const events = inserting('events');
  let last = 0;
  let commits = 0;
  return {
    insertNew: () => {
      const triggerRows = from.prepare<[number], Row>('SELECT * FROM triggers WHERE id > ? ORDER BY id').raw().all(last);
      const eventRows = from.prepare<[number], Row>('SELECT * FROM events WHERE trigger_id > ? ORDER BY trigger_id').raw().all(last);
      if (triggerRows.length !== eventRows.length) throw new Error('not every trigger has an event');
      const grounds = from.prepare<[], Row>('SELECT * FROM groundings').raw().all();
      for (const row of grounds) into.prepare(`INSERT OR IGNORE INTO groundings VALUES (${row.map(() => '?').join(', ')})`).run(...row);
      const before = commits;
      commits = from.prepare<[], number>(COMMITS).pluck().get() ?? 0;
      last = from.prepare<[], number>('SELECT max(id) FROM triggers').pluck().get() ?? 0;
      const perGroup = Math.round(triggerRows.length / (commits - before));
      const insert = into.transaction((at: number) => {
        for (let row = at; row < Math.min(at + perGroup, triggerRows.length); row++) {
          triggers.run(...(triggerRows[row] ?? []));
          events.run(...(eventRows[row] ?? []));
        }
      });
      const startedMs = performance.now();
      for (let at = 0; at < triggerRows.length; at += perGroup) insert.immediate(at);
      return { records: triggerRows.length, perGroup, seconds: (performance.now() - startedMs) / 1e3 };
    },
    close: () => {
      from.close();
      closeDb(db);
    },
  };
}
