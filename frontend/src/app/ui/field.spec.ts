import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { ChangeDetectionStrategy, Component, provideZonelessChangeDetection } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { FormControl, ReactiveFormsModule } from '@angular/forms';
import { describe, expect, it } from 'vitest';
import { email } from '#shared/contract/people';
import { Field } from './field';
import { FieldHarness } from './field.harness';
import { zodValidator } from './zod-validator';

@Component({
  selector: 'sw-one-field',
  imports: [Field, ReactiveFormsModule],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `<sw-field label="Email" [of]="control" hint="yours"><input [formControl]="control" /></sw-field>`,
})
class OneField {
  readonly control = new FormControl('', { nonNullable: true, validators: zodValidator(email()) });
}

describe('a field', () => {
  async function open() {
    TestBed.configureTestingModule({ providers: [provideZonelessChangeDetection()] });
    const fixture = TestBed.createComponent(OneField);
    const field = await TestbedHarnessEnvironment.loader(fixture).getHarness(FieldHarness.with({ label: 'Email' }));
    return { field, box: (fixture.nativeElement as HTMLElement).querySelector('input')! };
  }

  it('says what would be right once it was left', async () => {
    const { field, box } = await open();
    expect(await field.fault()).toBe('');
    await field.type('nobody');
    expect(await field.fault()).toBe('It must be an e-mail address, at most 254 characters.');
    expect(box.getAttribute('aria-invalid')).toBe('true');
    await field.type('ida@example.org');
    expect(await field.fault()).toBe('');
  });

  it('joins label, box and note for who hears them', async () => {
    const { box } = await open();
    expect(document.querySelector(`label[for=${box.id}]`)?.textContent).toBe('Email');
    expect(box.getAttribute('aria-describedby')).toBe(`${box.id}-note`);
  });
});
