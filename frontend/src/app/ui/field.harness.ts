import { ComponentHarness, HarnessPredicate } from '@angular/cdk/testing';

/** A field with its label and what it says, as a test drives it. */
export class FieldHarness extends ComponentHarness {
  static readonly hostSelector = 'sw-field';

  static with({ label }: { readonly label: string }) {
    return new HarnessPredicate(FieldHarness, {}).addOption('label', label, async (field, wanted) => (await field.label()) === wanted);
  }

  private readonly box = this.locatorFor('input, select, textarea');
  private readonly labelText = this.locatorFor('label');
  private readonly faultText = this.locatorForOptional('.fault');

  async label(): Promise<string> {
    return (await this.labelText()).text();
  }

  /** Types in place of what stood there, and leaves the field. */
  async type(text: string): Promise<void> {
    const box = await this.box();
    await box.clear();
    if (text !== '') await box.sendKeys(text);
    await box.blur();
  }

  /** The sentence of what would be right; empty when nothing is wrong. */
  async fault(): Promise<string> {
    return (await this.faultText())?.text() ?? '';
  }
}
