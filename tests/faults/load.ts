import { setTimeout as sleep } from 'node:timers/promises';
import { SiteClient } from '../../backend/site-client/site-client';
import { type History } from './history';
import { QUICK } from './kills-and-cuts';
import { plainRecord } from './records';
import { type StreamedServer } from './streamed-server';

const TICK_MS = 20;

/** A steady stream of one site. */
export interface Load {
  readonly server: StreamedServer;
  readonly history: History;
  /** Which of the server's sites it is of. */
  readonly at: number;
  /** The first number that it sends: several clients of one site share its numbers out. */
  readonly first: number;
  readonly perS: number;
  readonly durationMs: number;
  /** Between two records on the site's own clock, which is not the server's. */
  readonly apartNs: number;
}

/** What came of it. */
export interface Loaded {
  readonly sent: number;
  /** From handing a record to the client until its acknowledgement, ms. */
  readonly answeredMs: readonly number[];
}

/** Sends records at a steady rate, as far as the client takes them, and waits for all answers. */
export async function streamLoad({ server, history, at, first, perS, durationMs, apartNs }: Load): Promise<Loaded> {
  const { code, key } = server.sites[at]!;
  const begunMs = new Map<string, number>();
  const answeredMs: number[] = [];
  const client = new SiteClient({
    url: server.directUrl,
    key,
    software: 'load 1',
    retry: QUICK,
    onFate: (record, fate) => {
      answeredMs.push(performance.now() - begunMs.get(record.sequence)!);
      begunMs.delete(record.sequence);
      history.answer(code, record, fate);
    },
  });
  await client.welcome();
  const startMs = performance.now();
  let sent = 0;
  for (let passedMs = 0; passedMs < durationMs; passedMs = performance.now() - startMs) {
    for (; sent < (passedMs * perS) / 1_000; sent++) {
      const sequence = first + sent;
      // Sites are a little apart, so that not all of their triggers are near each other.
      const record = plainRecord(sequence, sequence * apartNs + (at * apartNs) / server.sites.length);
      history.attempt(code, record);
      begunMs.set(record.sequence, performance.now());
      await client.push(record);
    }
    await sleep(TICK_MS);
  }
  await client.finish();
  return { sent, answeredMs };
}

/** The value that so many of a hundred do not exceed. */
export const percentile = (values: readonly number[], percent: number): number =>
  values.toSorted((a, b) => a - b)[Math.max(0, Math.ceil((values.length * percent) / 100) - 1)] ?? NaN;
