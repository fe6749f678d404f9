import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { ChangeDetectionStrategy, Component, inject, provideZonelessChangeDetection, signal } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { beforeEach, describe, expect, it } from 'vitest';
import { InstantMark } from '../instants/instant';
import { InstantHarness } from '../instants/instant.harness';
import { Preferences } from '../preferences/preferences';
import { Segmented } from './segmented';
import { SegmentedHarness } from './segmented.harness';
import { Empty, Fault } from './states';
import { EmptyHarness, FaultHarness } from './states.harness';
import { Toasts, ToastStore } from './toasts';
import { ToastsHarness } from './toasts.harness';

@Component({
  selector: 'sw-parts',
  imports: [Empty, Fault, InstantMark, Segmented, Toasts],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <sw-empty heading="No sites yet">Pairs need two.</sw-empty>
    <sw-fault heading="The sites could not be loaded." text="The server is busy." (again)="asked.set(asked() + 1)" />
    <sw-segmented label="Scale" [options]="scales" [(value)]="preferences.scale" />
    <sw-instant of="2026-03-01T12:00:00.318Z" [decimals]="9" />
    <sw-toasts />
  `,
})
class Parts {
  readonly asked = signal(0);
  readonly preferences = inject(Preferences);
  readonly scales = [
    { value: 'UTC', word: 'UTC' },
    { value: 'TAI', word: 'TAI' },
  ] as const;
}

describe('the small parts', () => {
  beforeEach(() => {
    localStorage.clear();
    TestBed.configureTestingModule({ providers: [provideZonelessChangeDetection()] });
  });

  it('say what is missing, and what failed, and ask again', async () => {
    const fixture = TestBed.createComponent(Parts);
    const loader = TestbedHarnessEnvironment.loader(fixture);
    expect(await (await loader.getHarness(EmptyHarness)).heading()).toBe('No sites yet');
    const fault = await loader.getHarness(FaultHarness);
    expect(await fault.text()).toContain('The sites could not be loaded. The server is busy.');
    await fault.tryAgain();
    expect(fixture.componentInstance.asked()).toBe(1);
  });

  it('print an instant in the scale that is chosen', async () => {
    const loader = TestbedHarnessEnvironment.loader(TestBed.createComponent(Parts));
    const instant = await loader.getHarness(InstantHarness);
    const scales = await loader.getHarness(SegmentedHarness);
    expect(await instant.text()).toBe('2026-03-01 12:00:00.318000000 UTC');
    await scales.choose('TAI');
    expect(await scales.chosen()).toBe('TAI');
    expect(await instant.text()).toBe('2026-03-01 12:00:37.318000000 TAI');
  });

  it('repeat an act, and undo it once', async () => {
    const toasts = await TestbedHarnessEnvironment.loader(TestBed.createComponent(Parts)).getHarness(ToastsHarness);
    const undone: string[] = [];
    TestBed.inject(ToastStore).say('Bea is disabled.', () => undone.push('Bea'));
    expect(await toasts.said()).toEqual(['Bea is disabled.']);
    await toasts.undo();
    expect(undone).toEqual(['Bea']);
    expect(await toasts.said()).toEqual([]);
  });
});
