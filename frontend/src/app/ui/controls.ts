import { FormControl } from '@angular/forms';
import type * as z from 'zod';
import { numberTyped } from './number-typed';
import { zodValidator } from './zod-validator';

/** A control of text that a schema of the contract must take. */
export const textControl = (schema: z.ZodType, text = '') => new FormControl(text, { nonNullable: true, validators: zodValidator(schema) });

/** A control of a number as it is typed. */
export const numberControl = (schema: z.ZodType, text = '') =>
  new FormControl(text, { nonNullable: true, validators: zodValidator(schema, numberTyped) });

/** A control of a number that may be left empty. */
export const numberOrEmpty = (schema: z.ZodType, text = '') =>
  new FormControl(text, { nonNullable: true, validators: zodValidator(schema.optional(), numberTyped) });
