/**
 * What went wrong with something that came from outside, said so that the person who sent it can mend it.
 *
 * `code` is stable and for programs, `where` is the path of the field or the place in the file, `text` names what was wrong and what
 * was allowed.
 */
export interface Problem {
  readonly code: string;
  readonly where: string;
  readonly text: string;
}

/** A value, perhaps with warnings, or the one problem that kept it from being a value. Faults from outside are never thrown. */
export type Outcome<T> =
  { readonly ok: true; readonly value: T; readonly warnings: readonly Problem[] } | { readonly ok: false; readonly problem: Problem };

/** Wraps a value, with warnings where there are any. */
export function valueOf<T>(value: T, warnings: readonly Problem[] = []): Outcome<T> {
  return { ok: true, value, warnings };
}

/** Wraps a problem: its code, the field's path or place, and a sentence that says what was wrong and what is allowed. */
export function problemOf(code: string, where: string, text: string): { readonly ok: false; readonly problem: Problem } {
  return { ok: false, problem: { code, where, text } };
}
