import { ComponentHarness, HarnessPredicate } from '@angular/cdk/testing';

/** A choice of a few words, as a test drives it. */
export class SegmentedHarness extends ComponentHarness {
  static readonly hostSelector = 'sw-segmented';

  /** The one of a label. */
  static with({ label }: { readonly label: string }): HarnessPredicate<SegmentedHarness> {
    return new HarnessPredicate(SegmentedHarness, {}).addOption('label', label, async (one, of) => (await one.label()) === of);
  }

  private readonly group = this.locatorFor('[role=group]');
  private readonly chosenButton = this.locatorFor('button[aria-pressed=true]');
  private readonly buttons = this.locatorForAll('button');

  async label(): Promise<string | null> {
    return (await this.group()).getAttribute('aria-label');
  }

  async chosen(): Promise<string> {
    return (await this.chosenButton()).text();
  }

  async choose(word: string): Promise<void> {
    for (const button of await this.buttons()) if ((await button.text()) === word) await button.click();
  }
}
