import { type AbstractControl, type ValidationErrors } from '@angular/forms';
import type * as z from 'zod';
import { groupedDigits } from './figure';

/**
 * The one validator of all forms: a control holds what a schema of the contract takes, or says what would be right.
 *
 * @param schema of the field; its messages complete 'it must be'
 * @param before turns what is typed into what crosses the wire
 */
export function zodValidator(schema: z.ZodType, before: (typed: unknown) => unknown = (typed) => typed) {
  return ({ value }: AbstractControl<unknown>): ValidationErrors | null => {
    const given = before(value);
    const result = schema.safeParse(given);
    if (!result.success && given === undefined) return { zod: 'It is missing.' };
    return result.success ? null : { zod: rightOf(result.error.issues[0]?.message ?? '') };
  };
}

/** What would be right, as a sentence under the field. */
export const rightOf = (right: string): string => `It must be ${groupedDigits(right.replace(/[.]$/, ''))}.`;
