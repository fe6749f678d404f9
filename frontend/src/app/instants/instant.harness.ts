import { ComponentHarness } from '@angular/cdk/testing';

/** A printed instant, as a test reads it. */
export class InstantHarness extends ComponentHarness {
  static readonly hostSelector = 'sw-instant';

  /** The text without its gaps. */
  async text(): Promise<string> {
    return (await (await this.host()).text()).replace(/\s+/g, ' ');
  }
}
