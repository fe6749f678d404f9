/**
 * The number that someone typed: with a comma or point before the decimals, any blanks between digits, a hyphen or a true minus.
 *
 * @returns the number; nothing for nothing typed; what was typed where it is no number, so that a schema says what would be right
 */
export function numberTyped(typed: unknown): unknown {
  if (typeof typed !== 'string') return typed;
  const plain = typed.replace(/\s/g, '').replace(/^[\u2212\u2013]/, '-').replace(',', '.'); // prettier-ignore
  if (plain === '') return undefined;
  return /^[+-]?(?:\d+\.?\d*|\.\d+)(?:e[+-]?\d+)?$/i.test(plain) ? Number(plain) : typed;
}

/** The number of a control that has been found right. */
export const numberIn = (typed: string): number => Number(numberTyped(typed));
