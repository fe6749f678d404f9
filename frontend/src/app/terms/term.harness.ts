import { ComponentHarness } from '@angular/cdk/testing';

/** A `?` beside a word, as a test drives it. */
export class TermHarness extends ComponentHarness {
  static readonly hostSelector = 'sw-term';

  private readonly button = this.locatorFor('button');
  /** What it opens lies above the page. */
  private readonly note = this.documentRootLocatorFactory().locatorForOptional('[role=note]');

  async press(): Promise<void> {
    await (await this.button()).click();
  }

  /** What the word means, while it is open. */
  async meaning(): Promise<string | undefined> {
    return (await this.note())?.text();
  }
}
