// Preloaded into a server (NODE_OPTIONS=--import), lets a test harm its writer thread: by files of these names in the folder PLANTED, each
// within the transaction that comes next.
import { existsSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import process from 'node:process';
import { setImmediate } from 'node:timers';
import { isMainThread, workerData } from 'node:worker_threads';
import Database from 'better-sqlite3';

const LOOK_MS = 5;
const file = (name) => join(process.env.PLANTED, name);
const planted = (name) => existsSync(file(name));
const nothing = new Int32Array(new SharedArrayBuffer(4));

if (!isMainThread && workerData?.config) {
  const { transaction } = Database.prototype;
  Database.prototype.transaction = function (work) {
    return transaction.call(this, (...args) => {
      const value = work(...args);
      if (planted('block')) writeFileSync(file('blocked'), '');
      while (planted('block')) Atomics.wait(nothing, 0, 0, LOOK_MS);
      if (planted('fsync')) throw new Database.SqliteError('disk I/O error', 'SQLITE_IOERR_FSYNC');
      if (planted('crash'))
        setImmediate(() => {
          throw new Error('planted crash');
        });
      if (planted('exit')) process.exit(0); // of a thread, its own end
      return value;
    });
  };
}
