import { request } from 'node:http';
import { connect } from 'node:net';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { newFolder } from '../support/folder';
import { PRODUCTION, type RunningServer, startServer } from '../support/server';

let server: RunningServer;
beforeAll(async () => {
  server = await startServer({ DATA_DIR: newFolder('http') });
});
afterAll(async () => {
  await server.stop();
});

const get = (path: string, headers: Record<string, string> = {}): Promise<Response> => fetch(new URL(path, server.url), { headers });
const html = { accept: 'text/html,application/xhtml+xml' };

describe('GET /api/health', () => {
  it('answers from the database', async () => {
    const res = await get('/api/health');
    expect(res.status).toBe(200);
    expect(await res.json()).toEqual({
      status: 'ok',
      version: expect.stringMatching(/^\d+\.\d+\.\d+/) as string,
      database: 'answers',
      migrations: expect.any(Number) as number,
      deployment: { createdAt: expect.stringMatching(/^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z$/) as string },
    });
  });

  it('is never stored', async () => {
    expect((await get('/api/health')).headers.get('cache-control')).toBe('no-store');
  });
});

describe('what does not exist', () => {
  it('is an RFC 9457 problem under /api, whatever is accepted and however it is asked', async () => {
    for (const method of ['GET', 'POST', 'DELETE']) {
      const res = await fetch(new URL('/api/nothing', server.url), { method, headers: html });
      expect(res.status).toBe(404);
      expect(res.headers.get('content-type')).toBe('application/problem+json; charset=utf-8');
      expect(res.headers.get('cache-control')).toBe('no-store');
      expect(await res.json()).toEqual({
        type: 'about:blank',
        title: 'Not found',
        status: 404,
        detail: `Nothing is served at ${method} /api/nothing.`,
        id: expect.stringMatching(/^[0-9a-f-]{36}$/) as string,
      });
    }
  });

  it('is the application for a person, and a problem for a script or an image', async () => {
    const page = await get('/no/such/page', html);
    expect(page.status).toBe(200);
    expect(await page.text()).toContain('<sw-root');
    for (const path of ['/', '/no/such/page']) expect(await (await get(path, { accept: '*/*' })).text(), path).toContain('<sw-root');
    expect((await get('/chunk-ABCDEFGH.js', { accept: '*/*' })).status).toBe(404);
    expect((await get('/no/such/picture', { accept: 'image/avif,image/webp' })).status).toBe(404);
    expect((await fetch(server.url, { method: 'POST', headers: html })).status).toBe(404);
  });

  it('44 is nothing of the data folder or the sources', async () => {
    const kept = ['skewline.sqlite', 'skewline.sqlite-wal', 'audit-head', 'session-secret', 'demo.json'];
    for (const name of kept)
      for (const path of [`/${name}`, `/data/${name}`, `/api/${name}`, `/static/${name}`, `/static/..%2f${name}`, `/..%2fdata%2f${name}`]) {
        const res = await get(path, { accept: '*/*' });
        const text = await res.text();
        expect(res.status >= 400 || text.includes('<sw-root'), path).toBe(true);
        expect(text, path).not.toContain('SQLite format 3');
      }
    for (const path of ['/data/skewline.sqlite', '/..%2f..%2f..%2fpackage.json', '/%2e%2e/%2e%2e/package.json', '/.backend'])
      expect((await get(path)).status, path).toBeGreaterThanOrEqual(400);
  });

  it('is a refused request when the address cannot be decoded', async () => {
    const res = await get('/%E0%A4%A');
    expect(res.status).toBe(400);
    expect(res.headers.get('content-type')).toContain('application/problem+json');
  });
});

describe('the headers of every answer', () => {
  it.each(['/', '/api/health', '/api/nothing', '/static/icon.svg', '/missing.js'])('are strict at %s', async (path) => {
    const { headers } = await get(path, path === '/' ? html : {});
    const policy = headers.get('content-security-policy') ?? '';
    expect(policy).toMatch(/(^|;)default-src 'none'(;|$)/);
    expect(policy).toMatch(/(^|;)script-src 'self'(;|$)/);
    expect(policy).toMatch(/(^|;)style-src 'self' 'nonce-[A-Za-z0-9+/]{22}=='(;|$)/);
    expect(policy).toMatch(/(^|;)frame-ancestors 'none'(;|$)/);
    expect(policy).toMatch(/(^|;)require-trusted-types-for 'script'(;|$)/);
    expect(policy).not.toContain('unsafe');
    expect(headers.get('x-content-type-options')).toBe('nosniff');
    expect(headers.get('referrer-policy')).toBe('no-referrer');
    expect(headers.get('cross-origin-opener-policy')).toBe('same-origin');
    expect(headers.get('cross-origin-resource-policy')).toBe('same-origin');
    expect(headers.get('permissions-policy')).toContain('geolocation=()');
    expect(headers.get('x-frame-options')).toBe('DENY');
    expect(headers.get('x-powered-by')).toBeNull();
    expect(headers.get('strict-transport-security')).toBeNull();
  });

  it('carry a nonce that the page repeats and no other page has', async () => {
    const nonces = await Promise.all(
      ['/', '/index.html'].map(async (path) => {
        const res = await get(path, html);
        const nonce = /'nonce-([^']+)'/.exec(res.headers.get('content-security-policy') ?? '')?.[1];
        const text = await res.text();
        expect(text).toContain(`nonce="${nonce ?? 'none'}"`);
        expect(text).not.toContain('CSP_NONCE');
        return nonce;
      }),
    );
    expect(new Set(nonces).size).toBe(2);
  });

  it('let hashed files be kept for ever, and pages never without asking', async () => {
    const page = await get('/', html);
    expect(page.headers.get('cache-control')).toBe('no-cache');
    const script = /src="(main-[A-Z0-9]{8}\.js)"/.exec(await page.text())?.[1] ?? 'none';
    expect((await get(`/${script}`)).headers.get('cache-control')).toBe('public, max-age=31536000, immutable');
    expect((await get('/static/icon.svg')).headers.get('cache-control')).toBe('public, max-age=86400');
  });

  it('tell that scripts are compressed', async () => {
    const script = /src="(main-[A-Z0-9]{8}\.js)"/.exec(await (await get('/', html)).text())?.[1] ?? 'none';
    expect((await get(`/${script}`, { 'accept-encoding': 'gzip' })).headers.get('content-encoding')).toBe('gzip');
  });

  it('18 ask for https in production', async () => {
    const production = await startServer({ DATA_DIR: newFolder('production'), ...PRODUCTION });
    try {
      expect((await fetch(production.url)).headers.get('strict-transport-security')).toBe('max-age=31536000');
    } finally {
      await production.stop();
    }
  });
});

describe('a slow or broken client', () => {
  it('is cut off when its headers are not whole within 10 s', { timeout: 60_000 }, async () => {
    const { port } = new URL(server.url);
    const startMs = performance.now();
    const text = await new Promise<string>((resolve, reject) => {
      let received = '';
      const socket = connect(Number(port), '127.0.0.1', () => socket.write('GET / HTTP/1.1\r\nHost: x\r\n'));
      socket.setEncoding('utf8').on('data', (part: string) => (received += part));
      socket.on('close', () => {
        resolve(received);
      });
      socket.on('error', reject);
    });
    expect(text).toContain('408');
    expect(performance.now() - startMs).toBeGreaterThan(9_000);
    expect(performance.now() - startMs).toBeLessThan(15_000);
  });

  it('gets an answer to headers that are too long', async () => {
    const status = await new Promise<number | undefined>((resolve, reject) => {
      const req = request(new URL('/', server.url), { headers: { x: 'x'.repeat(20_000) } }, (res) => {
        res.resume();
        resolve(res.statusCode);
      });
      req.on('error', reject).end();
    });
    expect(status).toBe(431);
  });
});
