import { TestbedHarnessEnvironment } from '@angular/cdk/testing/testbed';
import { type Type } from '@angular/core';
import { TestBed } from '@angular/core/testing';
import { beforeAll, describe, expect, it, vi } from 'vitest';
import { IntervalDial } from './interval-dial';
import { IntervalDialHarness } from './interval-dial.harness';
import { OrderBar } from './order-bar';
import { OrderBarHarness } from './order-bar.harness';

const DRAWN_DEG = 0.05; // the dial is drawn to hundredths of its 27 units
const DRAWN_C = 1e-3; // the bar is drawn to hundredths of a pixel

function fixtureOf<T>(component: Type<T>, inputs: Readonly<Record<string, unknown>>) {
  const fixture = TestBed.createComponent(component);
  for (const [name, value] of Object.entries(inputs)) fixture.componentRef.setInput(name, value);
  return fixture;
}
const dialOf = (inputs: Readonly<Record<string, unknown>>): Promise<IntervalDialHarness> =>
  TestbedHarnessEnvironment.harnessForFixture(fixtureOf(IntervalDial, inputs), IntervalDialHarness);
const barOf = (inputs: Readonly<Record<string, unknown>>): Promise<OrderBarHarness> =>
  TestbedHarnessEnvironment.harnessForFixture(fixtureOf(OrderBar, { first: 'SVH', second: 'OMB', ...inputs }), OrderBarHarness);

const within = (value: number, wanted: number, by: number): void => expect(Math.abs(value - wanted)).toBeLessThan(by);

describe('the interval dial', () => {
  it('has light at 45 degrees, and its error about the needle', async () => {
    const dial = await dialOf({ of: 'undecided', dtNs: 1_000, lightNs: 1_000, halfNs: 200 });
    within(await dial.needleDeg(), 45, DRAWN_DEG);
    const [from, to] = await dial.wedgeDeg();
    within(from, (Math.atan(0.8) * 180) / Math.PI, DRAWN_DEG);
    within(to, (Math.atan(1.2) * 180) / Math.PI, DRAWN_DEG);
  });

  it('lies flat at one instant and stands at one place, with a wedge that is seen however small the error', async () => {
    const flat = await dialOf({ of: 'spacelike', dtNs: 0, lightNs: 1_000, halfNs: 0 });
    within(await flat.needleDeg(), 0, DRAWN_DEG);
    expect((await flat.wedgeDeg())[1]).toBeGreaterThan(1);
    const upright = await dialOf({ of: 'timelike', dtNs: 1_000, lightNs: 0, halfNs: 0 });
    within(await upright.needleDeg(), 90, DRAWN_DEG);
    expect((await upright.wedgeDeg())[0]).toBeLessThan(89);
  });

  it('is read out only where it has a name of its own', async () => {
    const inputs = { of: 'timelike', dtNs: 2, lightNs: 1 };
    expect(await (await dialOf(inputs)).isHidden()).toBe(true);
    const named = await dialOf({ ...inputs, label: 'SVH to OMB, timelike' });
    expect(await named.isHidden()).toBe(false);
    expect(await named.name()).toBe('SVH to OMB, timelike');
  });
});

describe('the order bar', () => {
  beforeAll(() => {
    vi.stubGlobal('ResizeObserver', class { observe = () => undefined; disconnect = () => undefined; }); // prettier-ignore
  });

  it('changes from the one to the other at the turning speed', async () => {
    const bar = await barOf({ turningC: 0.5, halfC: 0.1 });
    const [first, second] = await bar.parts();
    within(first, 0.75, DRAWN_C);
    within(second, 0.25, DRAWN_C);
    within((await bar.boxC()) ?? 0, 0.2, DRAWN_C);
    expect(await bar.words()).toBe('Order against frame speed along the baseline: SVH first below 0.500 c, OMB first above');
    expect((await bar.leads())[0]).toBe('SVH first');
  });

  it('is solid throughout where no frame turns the order', async () => {
    const bar = await barOf({ turningC: null });
    expect(await bar.parts()).toEqual([1, 0]);
    expect(await bar.boxC()).toBeUndefined();
    expect(await bar.words()).toBe('SVH first in every frame');
  });

  it('does not name who leads beyond a turning speed that is not certain', async () => {
    expect(await (await barOf({ turningC: 0, turns: false })).leads()).toEqual(['SVH first']);
    expect(await (await barOf({ turningC: 0 })).leads()).toEqual(['SVH first', 'OMB first']);
  });

  it('has the frames from left to right by their speeds', async () => {
    const frames = [{ name: 'courier', velocityC: 0.6 }, { name: 'back', velocityC: -0.6 }, { name: 'bary', velocityC: 1e-4 }]; // prettier-ignore
    expect(await (await barOf({ turningC: 0.2, frames })).frames()).toEqual(['back', 'bary', 'courier']);
  });
});
