import { type Utf8 } from '#shared/contract/record-batch';

const encoder = new TextEncoder();
const decoder = new TextDecoder('utf-8', { fatal: true, ignoreBOM: true });

/** The platform's UTF-8, strict, and with byte order marks kept. */
export const utf8: Utf8 = {
  encode: (text) => encoder.encode(text),
  decode: (bytes) => {
    try {
      return decoder.decode(bytes);
    } catch {
      return undefined;
    }
  },
};
