import { ComponentHarness } from '@angular/cdk/testing';

/** A choice of a few words, as a test drives it. */
export class SegmentedHarness extends ComponentHarness {
  static readonly hostSelector = 'sw-segmented';

  private readonly chosenButton = this.locatorFor('button[aria-pressed=true]');
  private readonly buttons = this.locatorForAll('button');

  async chosen(): Promise<string> {
    return (await this.chosenButton()).text();
  }

  async choose(word: string): Promise<void> {
    for (const button of await this.buttons()) if ((await button.text()) === word) await button.click();
  }
}
