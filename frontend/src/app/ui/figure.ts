import { Pipe, type PipeTransform } from '@angular/core';
import { plain } from '../desk/figures';

/** A number with every digit that was stated, whole ones in threes and with a true minus. */
export function figureText(value: number): string {
  const text = String(value);
  return text.includes('e') ? text : plain(value, text.split('.')[1]?.length ?? 0);
}

/** The same in a template. */
@Pipe({ name: 'swFigure' })
export class FigurePipe implements PipeTransform {
  transform(value: number): string {
    return figureText(value);
  }
}

/** Digits of a sentence in threes, where five or more stand together before a decimal point. */
export const groupedDigits = (sentence: string): string =>
  sentence.replace(/(?<![\w.])\d{5,}(?![\w])/g, (digits) => figureText(Number(digits)));
