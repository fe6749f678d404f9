import { createHash } from 'node:crypto';

/** The SHA-256 of a text's UTF-8 bytes, as 64 hex digits. */
export const sha256 = (text: string): string => createHash('sha256').update(text).digest('hex');
