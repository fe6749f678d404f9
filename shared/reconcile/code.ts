const CODE_FORM = /^[A-Za-z0-9_-]{1,24}$/;

/** What a code is, in words. */
export const CODE_RIGHT = '1 to 24 letters, digits, _ or -';

/** Whether a text is a code, as sites, clocks, frames, rules and series have them: 1 to 24 letters, digits, `_` or `-`. */
export const isCode = (value: string): boolean => CODE_FORM.test(value);
