import { afterEach, expect, it, vi } from 'vitest';
import { people, roles, siteKeys } from '#schema/schema';
import { passwordHasher } from '../../backend/accounts/password-hash';
import { SiteClient, SiteStreamRefused } from '../../backend/site-client/site-client';
import { Client } from '../support/client';
import { PASSWORD } from '../support/world';
import { plainRecord } from './records';
import { StreamedServer } from './streamed-server';

const CUT_WITHIN_MS = 2_000;
const PUSH_EVERY_MS = 10;
const EMAIL = 'chief@example.org';
const AT = '2020-03-01T00:00:00.000Z';

let server: StreamedServer | undefined;
afterEach(() => server?.close());

it('11 and 13 a key that is revoked by HTTP cuts its stream within 2 s, shows its last use, and cuts no other', async () => {
  const passwordHash = await (await passwordHasher('nobody has this one')).hash(PASSWORD);
  server = await StreamedServer.start({
    siteCount: 2,
    prepare: (db) => {
      const values = { email: EMAIL, name: 'Chief', passwordHash, passwordSetAt: AT, createdAt: AT };
      const { id: personId } = db.insert(people).values(values).returning({ id: people.id }).get();
      db.insert(roles).values({ personId, role: 'coordinator', networkId: null, siteId: null, givenAt: AT }).run();
    },
  });
  const { sites, url, directUrl } = server;
  const chief = new Client(directUrl);
  expect((await chief.post('/sign-in', { email: EMAIL, password: PASSWORD })).status).toBeLessThan(300);
  const streams = sites.map(({ key }) => {
    const client = new SiteClient({ url, key, software: 'keys 1' });
    let sequence = 0;
    const pushing = setInterval(() => void client.push(plainRecord(sequence, sequence++ * 1e6)).catch(() => undefined), PUSH_EVERY_MS);
    return { client, end: () => clearInterval(pushing) };
  });
  const [first, other] = streams;
  await Promise.all(streams.map(({ client }) => client.welcome()));
  const { id, keyId } = sites[0]!;
  const used = (): string | null => server!.read((db) => db.select().from(siteKeys).all()).find((row) => row.id === keyId)!.lastUsedAt;
  await vi.waitFor(() => expect(used()).not.toBeNull(), CUT_WITHIN_MS);
  const listed = (await chief.get(`/sites/${id}/keys`)).body as { items: { lastUsedAt: string | null }[] };
  expect(listed.items[0]?.lastUsedAt).toBe(used());

  const refused = endless(first!.client);
  const startMs = performance.now();
  expect((await chief.post(`/sites/${id}/keys/${keyId}/revoke`)).status).toBe(200);
  await expect(refused).rejects.toThrow(SiteStreamRefused);
  expect(performance.now() - startMs).toBeLessThan(CUT_WITHIN_MS);
  const again = new SiteClient({ url, key: sites[0]!.key, software: 'keys 1' });
  await expect(again.welcome()).rejects.toThrow('unknown here, or was revoked');
  for (const { end } of streams) end();
  await other!.client.finish();
}, 60_000);

/** Pushes until the client will have no more. */
async function endless(client: SiteClient): Promise<never> {
  for (let sequence = 1_000_000; ; sequence++) {
    await client.push(plainRecord(sequence % 8_000_000, 0));
    await new Promise((resolve) => setTimeout(resolve, PUSH_EVERY_MS));
  }
}
