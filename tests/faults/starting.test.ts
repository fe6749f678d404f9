import { setTimeout as sleep } from 'node:timers/promises';
import { afterEach, expect, it } from 'vitest';
import { SiteClient } from '../../backend/site-client/site-client';
import { QUICK } from './kills-and-cuts';
import { StreamedServer } from './streamed-server';

const LOOK_MS = 5;
/** Whoever comes while the server starts must not wait for longer than this to hear so. */
const MOST_WAIT_MS = 1_000;

let server: StreamedServer | undefined;
afterEach(() => server?.close());

it('a server that starts says so at once to whoever comes, in words that say when to come again', async () => {
  server = await StreamedServer.start();
  const { directUrl } = server;
  await server.end('SIGKILL');
  const starting = server.startAgain();
  const ask = (): Promise<Response | undefined> =>
    fetch(`${directUrl}/api/health`, { signal: AbortSignal.timeout(MOST_WAIT_MS) }).catch((fault: unknown) => {
      if (fault instanceof Error && fault.name === 'TimeoutError') throw fault;
      return undefined; // nobody listens yet
    });
  let answer: Response | undefined;
  while (!answer) {
    answer = await ask();
    await sleep(LOOK_MS);
  }
  expect([answer.status, answer.headers.get('content-type'), answer.headers.get('retry-after')]).toEqual([
    503,
    'application/problem+json; charset=utf-8',
    '2',
  ]);
  expect(await answer.json()).toMatchObject({ title: 'Starting', status: 503, detail: expect.stringContaining('again') as string });
  await starting;
  expect((await ask())?.status).toBe(200);
});

it('a site that comes while the server starts is back soon after it has', async () => {
  server = await StreamedServer.start();
  const client = new SiteClient({ url: server.directUrl, key: server.sites[0]!.key, software: 'faults 1', retry: QUICK });
  await client.welcome();
  await server.end('SIGKILL');
  await server.startAgain();
  const startMs = performance.now();
  await client.state({ completeTo: { taiS: 1, ps: 0 } });
  expect(performance.now() - startMs).toBeLessThan(MOST_WAIT_MS + QUICK.mostMs);
  await client.finish();
});
