import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { ChangeDetectionStrategy, Component, signal } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { beforeAll, describe, expect, it, vi } from 'vitest';
import { SpeedSlider } from './speed-slider';
import { SpeedSliderHarness } from './speed-slider.harness';

@Component({
  selector: 'sw-slid',
  imports: [SpeedSlider],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `<sw-speed-slider from="SVH" to="OMB" [speedC]="speedC()" [turnings]="turnings" (moved)="speedC.set($event)" />`,
})
class Slid {
  readonly speedC = signal(0);
  readonly turnings = [
    { speedC: 0.109, site: 'OMB', isMain: true },
    { speedC: -0.48, site: 'KTS', isMain: false },
  ];
}

const sliderAt = async (speedC: number): Promise<SpeedSliderHarness> => {
  const fixture = TestBed.createComponent(Slid);
  fixture.componentInstance.speedC.set(speedC);
  return TestbedHarnessEnvironment.loader(fixture).getHarness(SpeedSliderHarness);
};

describe('the slider of the frame speed', () => {
  beforeAll(() => {
    vi.stubGlobal('ResizeObserver', class { observe = () => undefined; disconnect = () => undefined; }); // prettier-ignore
  });

  it('goes by keys in hundredths of c, with Shift in thousandths, and to its ends', async () => {
    const slider = await sliderAt(0);
    await slider.press('right');
    await slider.press('right', true);
    expect(await slider.speedC()).toBe(0.011);
    await slider.press('left');
    expect(await slider.speedC()).toBe(0.001);
    await slider.press('end');
    await slider.press('right');
    expect(await slider.speedC()).toBe(0.99);
    await slider.press('home');
    expect(await slider.speedC()).toBe(-0.99);
  });

  it('says toward which site, and its gamma', async () => {
    // 0.6 c has gamma 1.25: the 3-4-5 triangle.
    expect(await (await sliderAt(-0.6)).words()).toBe('0.600 c toward SVH, gamma 1.250');
    expect(await (await sliderAt(0.6)).words()).toBe('0.600 c toward OMB, gamma 1.250');
    expect(await (await sliderAt(0)).words()).toBe('at rest in the geocentric frame');
  });

  it('prints a slow frame as more than none', async () => {
    expect(await (await sliderAt(0.000_12)).value()).toBe('\u03b2 0.00012, \u03b3 1.000');
  });

  it('marks each turning speed, and names that of the pair', async () => {
    const slider = await sliderAt(0);
    expect(await slider.turningCount()).toBe(2);
    expect(await slider.turns()).toBe('OMB turns at 0.109');
  });
});
