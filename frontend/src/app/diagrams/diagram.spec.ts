import { TestBed } from '@angular/core/testing';
import { beforeAll, describe, expect, it, vi } from 'vitest';
import { Diagram } from './diagram';
import { kindNumber } from './mark-shape';
import { oneScale } from './one-scale';

const BOX = { left: 50, top: 40, width: 400, height: 400 };
const KINDS = Uint8Array.from(['selected', 'timelike', 'spacelike'] as const, kindNumber);

/** Three events, the first selected: one above it in time, one to its right. */
function diagram(more: Readonly<Record<string, unknown>> = {}) {
  const fixture = TestBed.createComponent(Diagram);
  const { x, y } = oneScale({ leftMs: -5, topMs: 20, pxPerMs: 10 }, BOX);
  const plane = { count: 3, xMs: Float64Array.of(0, 0, 10), tMs: Float64Array.of(0, 8, 2) };
  const picture = { box: BOX, lines: [], words: [], xTicks: [], yTicks: [], xTitle: '', yTitle: '', slanted: false };
  const inputs = { widthPx: 500, heightPx: 500, picture, x, y, plane, kinds: KINDS, selected: 0, sitePlaces: plane.xMs, label: 'three' };
  for (const [name, value] of Object.entries({ ...inputs, nameOf: (row: number) => `event ${row}`, ...more }))
    fixture.componentRef.setInput(name, value);
  fixture.detectChanges();
  const element = fixture.nativeElement as HTMLElement;
  return { fixture, element, svg: element.querySelector('svg')! };
}

describe('a diagram', () => {
  beforeAll(() => {
    vi.stubGlobal('matchMedia', () => ({ addEventListener: () => undefined, removeEventListener: () => undefined }));
    HTMLCanvasElement.prototype.getContext = () => null; // jsdom has no canvas
  });

  it('is one document of named symbols, each with the shape of its class', () => {
    const { element, svg } = diagram();
    expect(svg.getAttribute('role')).toBe('graphics-document');
    const symbols = [...element.querySelectorAll('[role=graphics-symbol]')].map((one) => one.getAttribute('aria-label'));
    expect(symbols).toEqual(['event 1', 'event 2', 'event 0, selected']);
    expect(element.querySelector('.mark.timelike')?.getAttribute('aria-label')).toBe('event 1');
    expect(element.querySelectorAll('[tabindex="0"]').length).toBe(1);
  });

  it('takes the fill of marks off the axis', () => {
    const { element } = diagram({ hollow: Uint8Array.of(0, 1, 0) });
    expect(element.querySelector('.mark.timelike')?.classList.contains('hollow')).toBe(true);
    expect(element.querySelector('.mark.spacelike')?.classList.contains('hollow')).toBe(false);
  });

  it('goes by keys in time and across, selects, and is left', () => {
    const { fixture, element, svg } = diagram();
    const picked: number[] = [];
    fixture.componentInstance.picked.subscribe((row) => picked.push(row));
    const press = (key: string) => {
      svg.dispatchEvent(new KeyboardEvent('keydown', { key, cancelable: true }));
      fixture.detectChanges();
      return element.querySelector('.active')?.getAttribute('aria-label');
    };
    expect(press('ArrowRight')).toBe('event 2');
    expect(press('ArrowRight')).toBe('event 1');
    expect(press('ArrowUp')).toBe('event 2');
    press('Enter');
    expect(press('Escape')).toBeUndefined();
    press('Escape');
    expect(picked).toEqual([2, -1]);
  });

  it('draws a leader from each mark that is shown to its row', () => {
    const { element } = diagram({ leaders: [{ row: 2, y: 77 }], gutterPx: 80 });
    expect(element.querySelector('.leader')?.getAttribute('d')).toBe('M458 220L530 77'); // 20 - 2 ms at 10 px from 40
  });
});
