/** Whole numbers with up to this many digits are doubles exactly; longer ones are kept as text. */
const EXACT_DIGITS = 15;

/**
 * Sequence numbers as one number each, however long they are: short ones as themselves, long ones as minus one, minus two, ... by their first
 * appearance.
 */
export class Sequences {
  private readonly long: string[] = [];
  private readonly codes = new Map<string, number>();

  /** The number that stands for a sequence without leading zeros; equal sequences give equal numbers. */
  codeOf(digits: string): number {
    if (digits.length <= EXACT_DIGITS) return Number(digits);
    const known = this.codes.get(digits);
    if (known !== undefined) return known;
    this.long.push(digits);
    this.codes.set(digits, -this.long.length);
    return -this.long.length;
  }

  textOf(code: number): string {
    return code >= 0 ? String(code) : (this.long[-code - 1] ?? '');
  }

  /** Order of two sequences as numbers. */
  compare(a: number, b: number): number {
    if (a >= 0 && b >= 0) return a - b;
    if (a >= 0 || b >= 0) return a >= 0 ? -1 : 1;
    const textA = this.textOf(a);
    const textB = this.textOf(b);
    return textA.length - textB.length || (textA < textB ? -1 : textA > textB ? 1 : 0);
  }
}
