/** Two 32-bit halves of a record's content. */
export interface ContentHash {
  first: number;
  second: number;
}

const FIRST_PRIME = 0x01000193;
const SECOND_PRIME = 0x5bd1e995;

/** Starting values of a column, from its name; made once a file. */
export function columnSeed(name: string): ContentHash {
  const seed = { first: 0, second: 0 };
  addCell({ first: 0x811c9dc5, second: 0x2545f491 }, name, seed);
  return seed;
}

const mixed = (value: number): number => {
  let v = Math.imul(value ^ (value >>> 16), 0x7feb352d);
  v = Math.imul(v ^ (v >>> 15), 0x846ca68b);
  return v ^ (v >>> 16);
};

/**
 * Adds one cell to a record's content, so that the sum does not depend on the order of columns and an empty cell is like a missing column.
 *
 * Line breaks within a cell count alike whether they are LF or CRLF. Two contents share their 64 bits by accident once in 10^19.
 */
export function addCell(seed: ContentHash, text: string, into: ContentHash): void {
  if (text === '') return;
  let first = seed.first;
  let second = seed.second;
  let length = text.length;
  for (let at = 0; at < text.length; at++) {
    const character = text.charCodeAt(at);
    if (character === 13 && text.charCodeAt(at + 1) === 10) {
      length--;
      continue;
    }
    first = Math.imul(first ^ character, FIRST_PRIME);
    second = Math.imul(second ^ (second >>> 13) ^ character, SECOND_PRIME);
  }
  into.first = (into.first + mixed(first)) | 0;
  into.second = (into.second + mixed(second ^ length)) | 0;
}
