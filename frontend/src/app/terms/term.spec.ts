import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { ChangeDetectionStrategy, Component, provideZonelessChangeDetection } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { describe, expect, it } from 'vitest';
import { Term } from './term';
import { TermHarness } from './term.harness';
import { TERMS } from './terms';

@Component({ imports: [Term], changeDetection: ChangeDetectionStrategy.OnPush, template: `Least sites <sw-term of="fold" />` })
class OneTerm {}

describe('a ? beside a word', () => {
  it('opens what is meant by it, and closes', async () => {
    TestBed.configureTestingModule({ providers: [provideZonelessChangeDetection()] });
    const term = await TestbedHarnessEnvironment.loader(TestBed.createComponent(OneTerm)).getHarness(TermHarness);
    expect(await term.meaning()).toBeUndefined();
    await term.press();
    expect(await term.meaning()).toContain(TERMS.fold);
    await term.press();
    expect(await term.meaning()).toBeUndefined();
  });
});

describe('the list of terms', () => {
  it('has each in one line that does not end in a full stop, by its word as it stands in a sentence', () => {
    for (const [word, meaning] of Object.entries(TERMS)) {
      expect(meaning, word).not.toMatch(/\n|\.$/);
      expect(meaning.length, word).toBeGreaterThan(10);
    }
  });
});
