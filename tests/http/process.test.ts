import { type AddressInfo, connect, createServer } from 'node:net';
import { chmodSync, mkdirSync, readdirSync, readFileSync, renameSync, rmSync, statSync, symlinkSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import Database from 'better-sqlite3';
import { describe, expect, it } from 'vitest';
import { newFolder } from '../support/folder';
import { type Ended, PRODUCTION, runServer, startServer } from '../support/server';

const END_MS = 5_000; // what whoever stops the server may count on
const USABLE_LINE = /^skewline: [^\n]+\n$/;

const refused = (env: Readonly<Record<string, string>>): Promise<Ended> => runServer({ DATA_DIR: newFolder('refused'), ...env }).ended;

describe('a configuration that cannot be used', () => {
  it.each([
    [{ PORT: 'http' }, 'PORT="http" cannot be used: it must be a whole number from 0 to 65535, where 0 takes any free port.'],
    [{ PORT: '65536' }, 'PORT="65536" cannot be used: it must be a whole number from 0 to 65535, where 0 takes any free port.'],
    [{ PORT: '-1' }, 'PORT="-1" cannot be used: it must be a whole number from 0 to 65535, where 0 takes any free port.'],
    [{ HOST: 'my host' }, 'HOST="my host" cannot be used: it must be an address or name of this machine, such as 127.0.0.1 or ::1.'],
    [
      { HOST: '192.0.2.1', PORT: '0' },
      'HOST="192.0.2.1" cannot be listened on (EADDRNOTAVAIL): it must be an address or name of this machine.',
    ],
    [{ LOG_LEVEL: 'loud' }, 'LOG_LEVEL="loud" cannot be used: it must be one of fatal, error, warn, info, debug, trace, silent.'],
    [{ NODE_ENV: 'live' }, 'NODE_ENV="live" cannot be used: it must be one of development, production, test.'],
  ])('is one line and status 2: %j', async (env, line) => {
    const { code, stdout, stderr } = await refused(env);
    expect(stderr).toBe(`skewline: ${line}\n`);
    expect(stdout).toBe('');
    expect(code).toBe(2);
  });

  it('is told before anything is written', async () => {
    const folder = join(newFolder('untouched'), 'data');
    await refused({ DATA_DIR: folder, PORT: 'x' });
    expect(statSync(folder, { throwIfNoEntry: false })).toBeUndefined();
  });

  it('is a port that is taken', async () => {
    const holder = createServer();
    await new Promise<void>((resolve) => holder.listen(0, '127.0.0.1', resolve));
    const { port } = holder.address() as AddressInfo;
    try {
      const { code, stderr } = await refused({ PORT: String(port) });
      expect(stderr).toBe(`skewline: PORT=${port} is taken on 127.0.0.1: set PORT to a free one, or to 0 for any.\n`);
      expect(code).toBe(2);
    } finally {
      holder.close();
    }
  });

  it('is a data folder that is a file', async () => {
    const file = join(newFolder('file'), 'data');
    writeFileSync(file, '');
    const { code, stderr } = await refused({ PORT: '0', DATA_DIR: file });
    expect(stderr).toMatch(USABLE_LINE);
    expect(stderr).toContain(`DATA_DIR="${file}" cannot be used: it must be a folder that can be written`);
    expect(code).toBe(2);
  });
});

describe('a data folder that cannot be made', () => {
  it.each<[string, (folder: string) => string]>([
    ['below a file', (folder) => (writeFileSync(join(folder, 'file'), ''), join(folder, 'file', 'data'))],
    ['at a link to nothing', (folder) => (symlinkSync(join(folder, 'nothing'), join(folder, 'link')), join(folder, 'link'))],
    ['where the system lets nobody make one', () => '/proc/nope'],
  ])('is one line and status 2: %s', async (_what, dirIn) => {
    const folder = dirIn(newFolder('unmade'));
    const { code, stdout, stderr } = await refused({ PORT: '0', DATA_DIR: folder });
    expect(stderr).toMatch(USABLE_LINE);
    expect(stderr).toContain(`DATA_DIR="${folder}" cannot be used: it must be a folder that can be written (E`);
    expect([code, stdout]).toEqual([2, '']);
  });
});

describe('a data folder that a server uses', () => {
  it('is refused to a second one, and the first goes on', async () => {
    const folder = newFolder('used');
    const server = await startServer({ DATA_DIR: folder });
    const { code, stdout, stderr } = await refused({ PORT: '0', DATA_DIR: folder });
    expect(stderr).toBe(
      `skewline: DATA_DIR="${folder}" is in use by another server: stop that one, or set DATA_DIR to a folder of its own.\n`,
    );
    expect([code, stdout]).toEqual([2, '']);
    expect((await fetch(new URL('/api/health', server.url))).status).toBe(200);
    await server.stop();
  });

  it.each(['SIGTERM', 'SIGKILL'] as const)('is free again after %s', async (signal) => {
    const folder = newFolder('freed');
    await (await startServer({ DATA_DIR: folder })).stop(signal);
    const next = await startServer({ DATA_DIR: folder });
    expect((await fetch(new URL('/api/health', next.url))).status).toBe(200);
    expect((await next.stop()).code).toBe(0);
  });
});

describe('43 production does not start', () => {
  const without = (name: keyof typeof PRODUCTION): Record<string, string> => ({ ...PRODUCTION, [name]: '' });

  it.each([
    ['declared TLS termination', 'TLS', 'TLS="" cannot be used: it must be "proxy" in production'],
    ['an origin', 'PUBLIC_ORIGIN', 'PUBLIC_ORIGIN="" cannot be used: it must be set in production'],
    ['a mail server', 'SMTP_URL', 'SMTP_URL="" cannot be used: it must be set in production'],
    ['a secret', 'SESSION_SECRET', 'SESSION_SECRET is absent, and so is'],
  ] as const)('without %s, and says so', async (_what, name, line) => {
    const { code, stdout, stderr } = await refused({ PORT: '0', ...without(name) });
    expect(stderr).toMatch(USABLE_LINE);
    expect(stderr).toContain(line);
    expect(stdout).toBe('');
    expect(code).toBe(2);
  });

  it('without a data directory that can be written, and says so', async () => {
    const file = join(newFolder('file'), 'data');
    writeFileSync(file, '');
    const { code, stderr } = await refused({ PORT: '0', ...PRODUCTION, DATA_DIR: file });
    expect(stderr).toContain('it must be a folder that can be written');
    expect(code).toBe(2);
  });

  it('but starts with all of them, or with the secret in its file, and then has no account, no demo and no kept mails (5)', async () => {
    const folder = newFolder('production-file');
    writeFileSync(join(folder, 'session-secret'), 'x'.repeat(32));
    const server = await startServer({ DATA_DIR: folder, ...without('SESSION_SECRET') });
    const { status } = await fetch(new URL('/api/kept-mails', server.url));
    await server.stop();
    expect(status).toBe(404);
    expect(statSync(join(folder, 'session-secret')).mode & 0o777).toBe(0o600);
    const db = new Database(join(folder, 'skewline.sqlite'), { readonly: true });
    expect(db.prepare('SELECT count(*) FROM people').pluck().get()).toBe(0);
    db.close();
  });
});

describe('9 a secret of sessions', () => {
  it('of fewer than 32 bytes is no start, in the environment and in its file', async () => {
    expect((await refused({ PORT: '0', SESSION_SECRET: 'x'.repeat(31) })).stderr).toContain('it must be a secret of 32 to 1024 bytes');
    const folder = newFolder('short-secret');
    writeFileSync(join(folder, 'session-secret'), `${'x'.repeat(31)}\n`);
    const { code, stderr } = await refused({ PORT: '0', DATA_DIR: folder });
    expect(stderr).toContain('session-secret holds 31 bytes: it must hold a secret of at least 32 bytes.');
    expect(stderr).not.toContain('xxx');
    expect(code).toBe(2);
  });

  it('is made once outside production, for its owner alone', async () => {
    const folder = newFolder('made-secret');
    const secret = async (): Promise<string> => {
      await (await startServer({ DATA_DIR: folder })).stop();
      expect(statSync(join(folder, 'session-secret')).mode & 0o777).toBe(0o600);
      return readFileSync(join(folder, 'session-secret'), 'utf8');
    };
    const first = await secret();
    expect(Buffer.from(first, 'base64')).toHaveLength(48);
    expect(await secret()).toBe(first);
  });
});

describe('a database that cannot be used', () => {
  it('is one that a newer program made, and it is left as it was', async () => {
    const folder = newFolder('newer');
    await (await startServer({ DATA_DIR: folder })).stop();
    const file = join(folder, 'skewline.sqlite');
    const newer = new Database(file);
    newer.prepare("INSERT INTO __drizzle_migrations (hash, created_at) VALUES ('of the future', 9999999999999)").run();
    newer.close();
    const before = statSync(file).mtimeMs;
    const { code, stderr } = await refused({ PORT: '0', DATA_DIR: folder });
    expect(stderr).toMatch(USABLE_LINE);
    expect(stderr).toContain('was made by a newer Skewline (1 of its migrations are unknown here)');
    expect(code).toBe(2);
    expect(statSync(file).mtimeMs).toBe(before);
  });

  it('is a file that is none', async () => {
    const folder = newFolder('garbage');
    writeFileSync(join(folder, 'skewline.sqlite'), 'this is a letter to a friend, '.repeat(200));
    const { code, stderr } = await refused({ PORT: '0', DATA_DIR: folder });
    expect(stderr).toMatch(USABLE_LINE);
    expect(stderr).toContain('is damaged (SQLITE_NOTADB)');
    expect(code).toBe(2);
  });
});

describe('the data folder', () => {
  it('44 is made for its owner alone', async () => {
    const folder = join(newFolder('modes'), 'deep', 'data');
    const server = await startServer({ DATA_DIR: folder });
    try {
      expect(statSync(folder).mode & 0o777).toBe(0o700);
      const files = readdirSync(folder);
      expect(files).toContain('skewline.sqlite');
      for (const name of files) expect(statSync(join(folder, name)).mode & 0o777, name).toBe(0o600);
    } finally {
      await server.stop();
    }
  });

  it('keeps its database closed to others when it was found open', async () => {
    const folder = newFolder('wide');
    mkdirSync(folder, { recursive: true });
    writeFileSync(join(folder, 'skewline.sqlite'), '');
    chmodSync(join(folder, 'skewline.sqlite'), 0o644);
    await (await startServer({ DATA_DIR: folder })).stop();
    expect(statSync(join(folder, 'skewline.sqlite')).mode & 0o777).toBe(0o600);
  });

  it('is the same deployment after a restart', async () => {
    const folder = newFolder('restart');
    const asked = async (): Promise<unknown> => {
      const server = await startServer({ DATA_DIR: folder });
      const body: unknown = await (await fetch(new URL('/api/health', server.url))).json();
      await server.stop();
      return body;
    };
    expect(await asked()).toEqual(await asked());
  });
});

describe('a database that goes while the server runs', () => {
  const statusAfter = async (harm: (file: string) => void): Promise<{ status: number; body: unknown; log: string }> => {
    const folder = newFolder('gone');
    const server = await startServer({ DATA_DIR: folder });
    harm(join(folder, 'skewline.sqlite'));
    const res = await fetch(new URL('/api/health', server.url));
    const body: unknown = await res.json();
    return { status: res.status, body, log: (await server.stop()).stderr };
  };
  const unavailable = {
    type: 'about:blank',
    title: 'Database unavailable',
    status: 503,
    id: expect.stringMatching(/^[0-9a-f-]{36}$/) as string,
  };

  it('is told when the file was deleted', async () => {
    const { status, body } = await statusAfter((file) => rmSync(file));
    expect(status).toBe(503);
    expect(body).toEqual({ ...unavailable, detail: expect.stringContaining('moved, replaced or deleted') as string });
  });

  it('is told when another file stands in its place', async () => {
    const { status } = await statusAfter((file) => {
      writeFileSync(`${file}.new`, '');
      renameSync(`${file}.new`, file);
    });
    expect(status).toBe(503);
  });

  it('is told when it no longer answers, with the reason in the log alone', async () => {
    const { status, body, log } = await statusAfter((file) => {
      const other = new Database(file);
      other.exec('DROP TABLE deployment');
      other.close();
    });
    expect(status).toBe(503);
    expect(body).toEqual({ ...unavailable, detail: expect.stringContaining('does not answer') as string });
    expect(log).toContain('no such table: deployment');
    expect(log).toContain((body as { id: string }).id);
  });
});

describe('the end', () => {
  it.each(['SIGTERM', 'SIGINT'] as const)('comes within 5 s of %s, with status 0 and everything in the database file', async (signal) => {
    const folder = newFolder('end');
    const server = await startServer({ DATA_DIR: folder });
    await fetch(new URL('/api/health', server.url)); // leaves an idle connection
    const startMs = performance.now();
    const { code, stderr } = await server.stop(signal);
    expect(performance.now() - startMs).toBeLessThan(END_MS);
    expect(code).toBe(0);
    expect(stderr).toBe('');
    expect(readdirSync(folder).sort()).toEqual(['session-secret', 'skewline.lock', 'skewline.sqlite']); // the write-ahead log is gone
  });

  it('comes within 5 s although a client has not finished its request', async () => {
    const server = await startServer({ DATA_DIR: newFolder('end-busy') });
    const { port } = new URL(server.url);
    const socket = connect(Number(port), '127.0.0.1');
    socket.on('error', () => undefined);
    await new Promise<void>((resolve) => socket.write('GET / HTTP/1.1\r\nHost: x\r\n', () => { resolve(); })); // prettier-ignore
    const startMs = performance.now();
    const { code } = await server.stop();
    expect(performance.now() - startMs).toBeLessThan(END_MS);
    expect(code).toBe(0);
    socket.destroy();
  });

  it('prints one URL, how the first coordinator gets in while nobody can sign in, and nothing else on the way', async () => {
    const server = await startServer({ DATA_DIR: newFolder('words') });
    await fetch(server.url, { headers: { accept: 'text/html' } });
    const { stdout, stderr } = await server.stop();
    const nobody = 'Nobody can sign in yet: npx skewline user add --email ... --name ... lets the first coordinator in.';
    expect(stdout).toBe(`Skewline is at ${server.url}\n${nobody}\n`);
    expect(stderr).toBe('');
  });
});

describe('the log', () => {
  it('has one line for each request, without its query and headers', async () => {
    const server = await startServer({ DATA_DIR: newFolder('log'), LOG_LEVEL: 'debug' });
    await fetch(new URL('/api/health?token=secret', server.url), { headers: { authorization: 'secret' } });
    const { stderr } = await server.stop();
    expect(stderr).not.toContain('secret');
    const lines = stderr.split('\n').filter((line) => line.includes('"req"'));
    expect(lines).toHaveLength(1);
    expect(JSON.parse(lines[0]!)).toMatchObject({ req: { method: 'GET', path: '/api/health' }, res: { status: 200 } });
  });
});
