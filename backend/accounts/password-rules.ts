import { dictionary } from '@zxcvbn-ts/language-common';
import { normalPassword } from '#shared/contract/people';
import { unusable } from '../api/refusal';

const LEAST_NAME_CHARACTERS = 4; // shorter parts stand in too many innocent words
const LONGEST_REPEATED_UNIT = 6;
const PRODUCT = 'skewline';

const common = new Set(dictionary['passwords-common']);

/** Whom a password is for: their names may not stand in it. */
export interface Whose {
  readonly email: string;
  readonly name: string;
}

/**
 * Refuses a new password that others try first: one of some fifty thousand common ones, alone or with digits and signs around it, a few
 * characters over and over, a row such as 123456789012, or one that holds the person's name, e-mail or the product's name.
 *
 * @param password of a length that the contract allows
 * @param whose the person
 * @throws Refusal 400
 */
export function refuseWeakPassword(password: string, whose: Whose): void {
  const folded = normalPassword(password).toLowerCase();
  if (isCommon(folded)) throw weak('one that is not among the common ones, nor such a one with digits or signs around it');
  if (isRepeated(folded) || isRow(folded)) throw weak('more than a few characters repeated, or a row such as 123456789012');
  if (namesOf(whose).some((name) => folded.includes(name))) throw weak('one without your name, your e-mail address, or the name Skewline');
}

const weak = (right: string) => unusable({ where: 'password', text: `cannot be used; it must be ${right}` });

function isCommon(folded: string): boolean {
  const bare = folded.replace(/^[^\p{L}]+|[^\p{L}]+$/gu, '');
  return common.has(folded) || (bare !== '' && common.has(bare));
}

function isRepeated(folded: string): boolean {
  for (let length = 1; length <= LONGEST_REPEATED_UNIT; length += 1) {
    const unit = folded.slice(0, length);
    if (unit.repeat(Math.ceil(folded.length / length)).startsWith(folded)) return true;
  }
  return false;
}

/** Each character one above, or one below, the one before it; digits go round at ten. */
function isRow(folded: string): boolean {
  const codes = Array.from(folded, (one) => one.codePointAt(0) ?? 0);
  return [1, -1].some((step) => codes.every((code, at) => at === 0 || follows(codes[at - 1] ?? 0, code, step)));
}

function follows(before: number, code: number, step: number): boolean {
  const zero = 48;
  const isDigit = (one: number): boolean => one >= zero && one < zero + 10;
  return isDigit(before) && isDigit(code) ? (before - zero + step + 10) % 10 === code - zero : code - before === step;
}

function namesOf({ email, name }: Whose): string[] {
  const words = normalPassword(name)
    .toLowerCase()
    .split(/[^\p{L}\p{N}]+/u);
  const [mailbox = ''] = email.toLowerCase().split('@');
  return [...words, words.join(''), mailbox, ...mailbox.split(/[^\p{L}\p{N}]+/u), PRODUCT].filter(
    (one) => Array.from(one).length >= LEAST_NAME_CHARACTERS,
  );
}
