import { ComponentHarness } from '@angular/cdk/testing';

const numbersIn = (path: string | null): number[] => (path?.match(/-?\d+(?:\.\d+)?/g) ?? []).map(Number);
const degOf = (x = 0, y = 0): number => (Math.atan2(-y, x) * 180) / Math.PI;

/** The dial of a pair, as a test reads it. */
export class IntervalDialHarness extends ComponentHarness {
  static readonly hostSelector = 'sw-interval-dial';

  private readonly needle = this.locatorFor('.needle');
  private readonly wedge = this.locatorFor('.wedge');
  private readonly picture = this.locatorFor('svg');

  /** Where the needle points: 0 for at one instant, 90 for at one place, degrees. */
  async needleDeg(): Promise<number> {
    const [, , x, y] = numbersIn(await (await this.needle()).getAttribute('d'));
    return degOf(x, y);
  }

  /** From where to where the error reaches, degrees. */
  async wedgeDeg(): Promise<readonly [number, number]> {
    const [, , x1, y1, , , , , , x2, y2] = numbersIn(await (await this.wedge()).getAttribute('d'));
    return [degOf(x1, y1), degOf(x2, y2)];
  }

  /** What it is called; empty where words stand beside it. */
  async name(): Promise<string> {
    return (await (await this.picture()).getAttribute('aria-label')) ?? '';
  }

  async isHidden(): Promise<boolean> {
    return (await (await this.picture()).getAttribute('aria-hidden')) === 'true';
  }
}
