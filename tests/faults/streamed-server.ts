import { mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { siteKeys } from '#schema/schema';
import { root } from '../../scripts/lib.mjs';
import { newSiteKey } from '../../backend/accounts/site-key-use';
import { closeDb, openDb, type Db, openReading } from '../../backend/db';
import { type ChaosProxy, startChaosProxy } from '../support/chaos-proxy';
import { newFolder } from '../support/folder';
import { insertNetwork, insertRow } from '../support/network-rows';
import { type RunningServer, startServer } from '../support/server';

const AT = '2020-03-01T00:00:00.000Z';

/** So many sites some tens of kilometres apart, with exact clocks; a coincidence is two triggers that light could join. */
export function networkFile(siteCount: number) {
  return {
    network: 'Under faults',
    run: { name: 'first', from: '2020-01-01T00:00:00 TAI' },
    sites: Array.from({ length: siteCount }, (_, at) => ({
      code: `S${String(at).padStart(3, '0')}`,
      scale: 'TAI',
      clock: 'exact',
      reading_sigma_ns: 30,
      position: { geodetic: { latitude_deg: 46 + 0.3 * (at % 17), longitude_deg: 7 + 0.4 * Math.floor(at / 17), height_m: 500 } },
    })),
    rule: { code: 'light2', minimum_fold: 2, sigmas: 3, window: { kind: 'light-time' } },
  };
}

/** What the writer can be harmed with; see `planted-writer.mjs`. */
export type Harm = 'early' | 'forget' | 'slow';

/** What a server uses; see `measured.mjs`. */
export interface Measured {
  readonly rssBytes: number;
  readonly mostRssBytes: number;
  readonly lateP99Ms: number;
}

/** The built server as a process of its own over a database file, behind a proxy, and started again at the same port. */
export class StreamedServer {
  private running: RunningServer | undefined;
  private port = '0';

  private constructor(
    readonly folder: string,
    readonly dataDir: string,
    readonly sites: readonly { readonly code: string; readonly id: number; readonly key: string; readonly keyId: number }[],
    readonly proxy: ChaosProxy,
    private readonly env: Readonly<Record<string, string>>,
  ) {}

  /**
   * Makes the database and starts the server.
   *
   * @param siteCount sites, each with a key
   * @param prepare what else is to be in the database
   * @param preload files of this folder that are loaded into the server before it
   */
  static async start({
    siteCount = 4,
    prepare = () => undefined,
    preload = [],
  }: {
    siteCount?: number;
    prepare?: (db: Db) => Promise<void> | void;
    preload?: readonly ('planted-writer.mjs' | 'measured.mjs' | 'held.mjs')[];
  } = {}): Promise<StreamedServer> {
    const folder = newFolder('faults');
    const dataDir = join(folder, 'data');
    mkdirSync(dataDir);
    const db = openDb(dataDir);
    const file = networkFile(siteCount);
    const { networkId, siteIds } = insertNetwork(db, file);
    const ruleId = insertRow(db, 'rules', { network_id: networkId, code: file.rule.code, name: '', is_active: 1, created_at: AT });
    insertRow(db, 'rule_versions', {
      rule_id: ruleId,
      number: 1,
      minimum_fold: file.rule.minimum_fold,
      sigmas: file.rule.sigmas,
      window_kind: 'light-time',
      speed_c: 1,
      margin_ns: 0,
      created_at: AT,
    });
    const sites = [...siteIds].map(([code, id]) => {
      const { key, prefix, hash } = newSiteKey();
      const values = { siteId: id, label: 'test', prefix, hash, createdAt: AT };
      return { code, id, key, keyId: db.insert(siteKeys).values(values).returning({ id: siteKeys.id }).get().id };
    });
    await prepare(db);
    closeDb(db);
    const proxy = await startChaosProxy(0);
    const urls = preload.map((name) => pathToFileURL(join(root, 'tests/faults', name)).href);
    const env = { PLANTED: folder, MEASURED: join(folder, 'measured.json'), NODE_OPTIONS: urls.map((url) => `--import ${url}`).join(' ') };
    const made = new StreamedServer(folder, dataDir, sites, proxy, env);
    await made.startAgain();
    return made;
  }

  /** Where clients reach it, through the proxy. */
  get url(): string {
    return `http://127.0.0.1:${this.proxy.port}`;
  }

  /** Where it is without the proxy. */
  get directUrl(): string {
    return `http://127.0.0.1:${this.port}`;
  }

  get process(): RunningServer {
    if (!this.running) throw new Error('the server is not running');
    return this.running;
  }

  /** Starts it where it was, and answers how long that took, in ms. */
  async startAgain(): Promise<number> {
    const startMs = performance.now();
    this.running = await startServer({ DATA_DIR: this.dataDir, PORT: this.port, LOG_LEVEL: 'error', ...this.env });
    this.port = new URL(this.running.url).port;
    this.proxy.leadTo(Number(this.port));
    return performance.now() - startMs;
  }

  /** Ends it by a signal, and waits until it has ended. */
  async end(signal: 'SIGKILL' | 'SIGTERM' = 'SIGTERM') {
    const ended = await this.process.stop(signal);
    this.running = undefined;
    return ended;
  }

  /** Harms its writer from now on; see `planted-writer.mjs`. */
  plant(harm: Harm): void {
    writeFileSync(join(this.folder, harm), '');
  }

  clear(harm: Harm): void {
    rmSync(join(this.folder, harm), { force: true });
  }

  /** What it uses, as `measured.mjs` wrote it last. */
  measured(): Measured {
    return JSON.parse(readFileSync(join(this.folder, 'measured.json'), 'utf8')) as Measured;
  }

  /** The most that its threads held together since they started, bytes, as `held.mjs` wrote it; the two need not have held it at once. */
  mostHeldBytes(): number {
    const of = (thread: string): number => Number(readFileSync(join(this.folder, `held-${thread}`), 'utf8'));
    return of('http') + of('writer');
  }

  /** What its database holds, by a connection that only reads. */
  read<T>(look: (db: Db) => T): T {
    const db = openReading(this.dataDir);
    try {
      return look(db);
    } finally {
      db.$client.close();
    }
  }

  async close(): Promise<void> {
    if (this.running) await this.end('SIGKILL');
    await this.proxy.close();
  }
}
