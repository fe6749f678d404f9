import { ComponentHarness } from '@angular/cdk/testing';

/** What could not be loaded, as a test reads it. */
export class FaultHarness extends ComponentHarness {
  static readonly hostSelector = 'sw-fault';

  private readonly words = this.locatorFor('[role=alert]');
  private readonly button = this.locatorFor('button');

  async text(): Promise<string> {
    return (await (await this.words()).text()).replace(/\s+/g, ' ').trim();
  }

  async tryAgain(): Promise<void> {
    await (await this.button()).click();
  }
}

/** Where nothing is yet, as a test reads it. */
export class EmptyHarness extends ComponentHarness {
  static readonly hostSelector = 'sw-empty';

  private readonly headingText = this.locatorFor('h2');

  async heading(): Promise<string> {
    return (await this.headingText()).text();
  }
}
