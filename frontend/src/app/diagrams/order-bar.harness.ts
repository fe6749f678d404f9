import { ComponentHarness, type TestElement } from '@angular/cdk/testing';

/** The order of a pair against the speed of frames, as a test reads it. */
export class OrderBarHarness extends ComponentHarness {
  static readonly hostSelector = 'sw-order-bar';

  private readonly picture = this.locatorFor('svg');
  private readonly solid = this.locatorFor('.solid');
  private readonly open = this.locatorFor('.open');
  private readonly bound = this.locatorForOptional('.bound');
  private readonly leaders = this.locatorForAll('.who');
  private readonly titles = this.locatorForAll('.glyph title');

  async words(): Promise<string> {
    return (await (await this.picture()).getAttribute('aria-label')) ?? '';
  }

  /** The part of the bar where the first leads, and the part where the second does: they are the whole. */
  async parts(): Promise<readonly [number, number]> {
    const [first, second] = [await widthOf(await this.solid()), await widthOf(await this.open())];
    return [first / (first + second), second / (first + second)];
  }

  /** How wide the box at the turning speed is, in c; undefined where no frame turns the order. */
  async boxC(): Promise<number | undefined> {
    const box = await this.bound();
    if (!box) return undefined;
    const bar = (await widthOf(await this.solid())) + (await widthOf(await this.open()));
    return ((await widthOf(box)) / bar) * 2;
  }

  async leads(): Promise<readonly string[]> {
    return Promise.all((await this.leaders()).map(async (one) => (await one.text()).trim()));
  }

  /** Frames from left to right. */
  async frames(): Promise<readonly string[]> {
    return Promise.all((await this.titles()).map((one) => one.text()));
  }
}

const widthOf = async (element: TestElement): Promise<number> => Number(await element.getAttribute('width'));
