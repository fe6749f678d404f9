// Preloaded into a server (NODE_OPTIONS=--import), harms how its writer thread keeps what sites send, by files of these names in the folder
// PLANTED: `early` puts each commit off, so that the acknowledgement comes before it; `forget` undoes the next transaction with triggers, and
// acknowledges it; `slow` lets each transaction with triggers take longer.
import { existsSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import process from 'node:process';
import { setTimeout } from 'node:timers';
import { isMainThread, workerData } from 'node:worker_threads';
import Database from 'better-sqlite3';

const EARLY_MS = 400;
const SLOW_MS = 200;
const file = (name) => join(process.env.PLANTED, name);
const planted = (name) => existsSync(file(name));
const nothing = new Int32Array(new SharedArrayBuffer(4));

class Undone extends Error {}

/** Begins a transaction around all that follow, which becomes theirs in that it is committed later than they are. */
function putOff(db) {
  if (db.inTransaction) return;
  db.exec('BEGIN IMMEDIATE');
  setTimeout(() => db.open && db.inTransaction && db.exec('COMMIT'), EARLY_MS);
}

const lastTrigger = (db) => db.prepare('SELECT max(id) FROM triggers').pluck().get() ?? 0;

if (!isMainThread && workerData?.config) {
  const { transaction } = Database.prototype;
  Database.prototype.transaction = function (work) {
    let value;
    const inner = transaction.call(this, (...args) => {
      const before = planted('forget') || planted('slow') ? lastTrigger(this) : Infinity;
      value = work(...args);
      const hasTriggers = lastTrigger(this) > before;
      if (hasTriggers && planted('slow')) Atomics.wait(nothing, 0, 0, SLOW_MS);
      if (hasTriggers && planted('forget')) {
        rmSync(file('forget'));
        throw new Undone();
      }
      return value;
    });
    const run = (variant) =>
      function (...args) {
        if (planted('early')) putOff(variant.database);
        try {
          return variant.apply(this, args);
        } catch (fault) {
          if (fault instanceof Undone) return value;
          throw fault;
        }
      };
    const made = run(inner);
    for (const name of ['default', 'deferred', 'immediate', 'exclusive']) made[name] = run(inner[name]);
    made.database = this;
    return made;
  };
}
