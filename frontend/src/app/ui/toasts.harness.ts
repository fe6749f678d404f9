import { ComponentHarness } from '@angular/cdk/testing';

/** The words about what was just done, as a test reads them. */
export class ToastsHarness extends ComponentHarness {
  static readonly hostSelector = 'sw-toasts';

  private readonly texts = this.locatorForAll('p');
  private readonly undoButton = this.locatorFor('button.link');

  /** What each says, oldest first. */
  async said(): Promise<string[]> {
    return Promise.all((await this.texts()).map((text) => text.text()));
  }

  /** Takes the act back of the first that can be. */
  async undo(): Promise<void> {
    await (await this.undoButton()).click();
  }
}
