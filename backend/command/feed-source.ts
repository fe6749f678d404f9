import { closeSync, fstatSync, openSync, readSync, statSync } from 'node:fs';
import { addAbortSignal, type Readable } from 'node:stream';
import { setTimeout as wait } from 'node:timers/promises';

const BLOCK_BYTES = 1 << 17;
const POLL_MS = 200;

/** What a followed file brings: its next bytes, or that it begins anew and why. */
export type FollowedPart = Buffer | { readonly beginsAnew: string; readonly isCutShort: boolean };

/** The bytes of a file up to its end, block by block; each block is the reader's own. */
export function* blocksOf(path: string): Generator<Buffer> {
  const descriptor = openSync(path, 'r');
  try {
    for (;;) {
      const block = nextBlock(descriptor);
      if (!block) return;
      yield block;
    }
  } finally {
    closeSync(descriptor);
  }
}

function nextBlock(descriptor: number): Buffer | undefined {
  const block = Buffer.allocUnsafe(BLOCK_BYTES);
  const bytes = readSync(descriptor, block, 0, BLOCK_BYTES, null);
  return bytes > 0 ? block.subarray(0, bytes) : undefined;
}

/**
 * The bytes of a file that grows, until the signal is aborted. A file that became shorter, or in whose place stands another, is read from its
 * start; the former one is read to its end before that.
 */
export async function* followed(path: string, signal: AbortSignal): AsyncGenerator<FollowedPart> {
  let descriptor = openSync(path, 'r');
  let readBytes = 0;
  try {
    while (!signal.aborted) {
      const block = nextBlock(descriptor);
      if (block) {
        readBytes += block.length;
        yield block;
        continue;
      }
      await wait(POLL_MS, undefined, { signal }).catch(() => undefined);
      const own = fstatSync(descriptor);
      if (own.size > readBytes) continue;
      const there = statSync(path, { throwIfNoEntry: false });
      const isReplaced = there !== undefined && (there.ino !== own.ino || there.dev !== own.dev);
      if (!isReplaced && own.size >= readBytes) continue;
      closeSync(descriptor);
      descriptor = openSync(path, 'r');
      readBytes = 0;
      yield {
        beginsAnew: isReplaced ? 'another file stands in its place' : 'it became shorter',
        isCutShort: !isReplaced,
      };
    }
  } finally {
    closeSync(descriptor);
  }
}

/** What a stream brings, until the signal is aborted: then it is closed, since whoever waits for its next part might wait for ever. */
export async function* partsOf(input: Readable, signal: AbortSignal): AsyncGenerator<Buffer> {
  const parts: AsyncIterable<Buffer> = addAbortSignal(signal, input);
  try {
    yield* parts;
  } catch (fault) {
    if (!signal.aborted) throw fault;
  }
}
