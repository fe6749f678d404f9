// Preloaded into a server (NODE_OPTIONS=--import), lets its writer go on after an I/O error as if the transaction had been committed.
import { isMainThread, workerData } from 'node:worker_threads';
import Database from 'better-sqlite3';

if (!isMainThread && workerData?.config) {
  const { transaction } = Database.prototype;
  Database.prototype.transaction = function (work) {
    let value;
    const inner = transaction.call(this, (...args) => (value = work(...args)));
    const goingOn =
      (run) =>
      (...args) => {
        try {
          return run(...args);
        } catch (fault) {
          if (fault.code?.startsWith('SQLITE_IOERR')) return value;
          throw fault;
        }
      };
    const made = goingOn(inner);
    for (const name of ['default', 'deferred', 'immediate', 'exclusive']) made[name] = goingOn(inner[name]);
    return made;
  };
}
