import { type Exchange } from './exchange';
import { unusableRequest } from './refusal';

const MOST_DEPTH = 32;
const MOST_ITEMS = 10_000;
const KEYS_OF_PROTOTYPES = ['__proto__', 'constructor', 'prototype'];

/**
 * Reads the body of a request as JSON: UTF-8, in the bounds of its route, not compressed, and nothing in it that only looks like data.
 *
 * @param exchange of type application/json, which was checked before
 * @param mostBytes what the route allows
 * @throws Refusal 413 above the bound; 415 for another charset or a compression; 400 for text that is not JSON, deeper than 32, of more
 * than 10,000 items, with a number that no double holds, half a character, or a key of prototypes
 */
export async function readBody({ header, bytes }: Exchange, mostBytes: number): Promise<unknown> {
  const charset = /;\s*charset\s*=\s*"?([^\s;"]+)/i.exec(header('content-type') ?? '')?.[1];
  if (charset !== undefined && charset.toLowerCase() !== 'utf-8') throw unusableRequest(415, 'JSON is read as UTF-8 alone.');
  const came = await bytes(mostBytes);
  let read: unknown;
  try {
    read = JSON.parse(new TextDecoder('utf-8', { fatal: true }).decode(came));
  } catch {
    throw unusableRequest(400, 'The body must be JSON in UTF-8; without fields it is {}.');
  }
  refuseOddities(read);
  return read;
}

function refuseOddities(body: unknown): void {
  let items = 0;
  const waiting: { value: unknown; depth: number }[] = [{ value: body, depth: 0 }];
  for (let next = waiting.pop(); next; next = waiting.pop()) {
    const { value, depth } = next;
    if (typeof value === 'string') refuseHalfCharacters(value);
    if (typeof value === 'number' && !Number.isFinite(value)) throw unusableRequest(400, 'A number of the body is too large to be kept.');
    if (typeof value !== 'object' || value === null) continue;
    if (depth >= MOST_DEPTH) throw unusableRequest(400, `The body must be at most ${MOST_DEPTH} levels deep.`);
    for (const [key, part] of Object.entries(value)) {
      items += 1;
      if (items > MOST_ITEMS) throw unusableRequest(400, `The body must have at most ${MOST_ITEMS} items.`);
      if (KEYS_OF_PROTOTYPES.includes(key)) throw unusableRequest(400, `The body must have no field ${key}.`);
      refuseHalfCharacters(key);
      waiting.push({ value: part, depth: depth + 1 });
    }
  }
}

function refuseHalfCharacters(text: string): void {
  if (/\p{Surrogate}/u.test(text)) throw unusableRequest(400, 'A text of the body holds half a character (a lone surrogate).');
}
