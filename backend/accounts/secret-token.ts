import { createHash, randomBytes } from 'node:crypto';

/** A new secret of so many random bits, in base64url. */
export const newSecret = (bits: number): string => randomBytes(bits / 8).toString('base64url');

/**
 * What the database keeps in place of a secret: its SHA-256. A slow hash is for what people think up; 128 random bits cannot be guessed.
 */
export const secretHash = (secret: string): Buffer => createHash('sha256').update(secret, 'utf8').digest();
