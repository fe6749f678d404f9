const BLOCK_BYTES = 64;
const LENGTH_BYTES = 8;

/**
 * SHA-1 of a text of ASCII characters, as 40 lower-case hex digits.
 *
 * It guards leap-second lists, whose format prescribes it, against damage; against forgery it is no protection. Written out because
 * `shared` runs in browser and server alike and takes no package. A character beyond 127 is our own mistake and throws.
 * Source: FIPS 180-4 (2015), section 6.1.
 */
export function sha1OfAscii(text: string): string {
  const words = paddedWords(text);
  let [h0, h1, h2, h3, h4] = [0x67452301, 0xefcdab89, 0x98badcfe, 0x10325476, 0xc3d2e1f0];
  const w = new DataView(new ArrayBuffer(80 * 4));
  for (let block = 0; block < words.byteLength; block += BLOCK_BYTES) {
    let [a, b, c, d, e] = [h0, h1, h2, h3, h4];
    for (let t = 0; t < 80; t++) {
      const word = t < 16 ? words.getUint32(block + 4 * t) : rotateLeft(at(w, t - 3) ^ at(w, t - 8) ^ at(w, t - 14) ^ at(w, t - 16), 1);
      w.setUint32(4 * t, word);
      const next = rotateLeft(a, 5) + mixed(t, b, c, d) + e + word;
      [a, b, c, d, e] = [next | 0, a, rotateLeft(b, 30), c, d];
    }
    [h0, h1, h2, h3, h4] = [(h0 + a) | 0, (h1 + b) | 0, (h2 + c) | 0, (h3 + d) | 0, (h4 + e) | 0];
  }
  return [h0, h1, h2, h3, h4].map((h) => (h >>> 0).toString(16).padStart(8, '0')).join('');
}

/** The text's bytes, a 1 bit, zeros, and the length in bits, in whole blocks (section 5.1.1). */
function paddedWords(text: string): DataView {
  const blocks = Math.ceil((text.length + 1 + LENGTH_BYTES) / BLOCK_BYTES);
  const view = new DataView(new ArrayBuffer(blocks * BLOCK_BYTES));
  for (let i = 0; i < text.length; i++) {
    const code = text.charCodeAt(i);
    if (code > 127) throw new RangeError(`sha1OfAscii: character ${code} at ${i} is not ASCII`);
    view.setUint8(i, code);
  }
  view.setUint8(text.length, 0x80);
  view.setBigUint64(view.byteLength - LENGTH_BYTES, BigInt(text.length) * 8n);
  return view;
}

/** The round's function of b, c, d plus its constant (sections 4.1.1 and 4.2.1). */
function mixed(t: number, b: number, c: number, d: number): number {
  if (t < 20) return ((b & c) | (~b & d)) + 0x5a827999;
  if (t < 40) return (b ^ c ^ d) + 0x6ed9eba1;
  if (t < 60) return ((b & c) | (b & d) | (c & d)) + 0x8f1bbcdc;
  return (b ^ c ^ d) + 0xca62c1d6;
}

function at(schedule: DataView, t: number): number {
  return schedule.getUint32(4 * t);
}

function rotateLeft(word: number, bits: number): number {
  return (word << bits) | (word >>> (32 - bits));
}
