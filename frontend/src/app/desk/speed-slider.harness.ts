import { ComponentHarness, TestKey } from '@angular/cdk/testing';

const KEYS = { right: TestKey.RIGHT_ARROW, left: TestKey.LEFT_ARROW, end: TestKey.END, home: TestKey.HOME } as const;

/** The slider of the frame's speed, as a test drives and reads it. */
export class SpeedSliderHarness extends ComponentHarness {
  static readonly hostSelector = 'sw-speed-slider';

  private readonly bar = this.locatorFor('[role=slider]');
  private readonly ticks = this.locatorForAll('.turning');
  private readonly main = this.locatorForOptional('.turns');
  private readonly printed = this.locatorFor('.value');

  async press(key: keyof typeof KEYS, shift = false): Promise<void> {
    await (await this.bar()).sendKeys({ shift }, KEYS[key]);
  }

  async speedC(): Promise<number> {
    return Number(await (await this.bar()).getAttribute('aria-valuenow'));
  }

  /** What is read out of where it stands. */
  async words(): Promise<string> {
    return (await (await this.bar()).getAttribute('aria-valuetext')) ?? '';
  }

  async value(): Promise<string> {
    return (await this.printed()).text();
  }

  async turningCount(): Promise<number> {
    return (await this.ticks()).length;
  }

  async turns(): Promise<string> {
    return ((await (await this.main())?.text()) ?? '').replace(/\s+/g, ' ').trim();
  }
}
