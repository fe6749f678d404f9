import { type AbstractControl, type FormGroup } from '@angular/forms';
import { ApiProblem, sentenceOf } from '../api/api-problem';

/**
 * Puts a refused request's sentence at the field that it is about.
 *
 * @param form whose controls have the names of the body's fields
 * @returns the sentence for the form as a whole, when it is about no field of it; empty otherwise
 */
export function putFault(form: FormGroup, fault: unknown): string {
  const text = sentenceOf(fault);
  const control: AbstractControl | null = fault instanceof ApiProblem && fault.where !== undefined ? form.get(lastName(fault.where)) : null;
  if (!control) return text;
  control.setErrors({ server: text });
  control.markAsTouched();
  return '';
}

const lastName = (where: string): string => where.split('.').at(-1) ?? where;
