import { randomInt } from 'node:crypto';

const CONSONANTS = 'bdfghklmnprstvz';
const VOWELS = 'aeiou';
const WORDS = 4;
const SYLLABLES = 2;

const oneOf = (letters: string): string => letters.charAt(randomInt(letters.length));
const word = (): string => Array.from({ length: SYLLABLES }, () => oneOf(CONSONANTS) + oneOf(VOWELS)).join('');

/** A new password that is easily typed, such as `kabo-lire-tasu-mofi`: eight syllables of 75, 50 bits. */
export const newDemoPassword = (): string => Array.from({ length: WORDS }, word).join('-');
