import { describe, expect, it } from 'vitest';
import { readDeskAddress, writeDeskAddress } from './desk-address';

const read = (fields: Readonly<Record<string, string | null>>) => readDeskAddress((name) => fields[name] ?? null);

describe('the address of a desk', () => {
  it('is as usual where it says nothing, and then has no fields', () => {
    const usual = { view: 'sites', speedC: 0, sort: 'time', order: 'down' } as const;
    expect(read({})).toEqual(usual);
    expect(Object.values(writeDeskAddress(usual)).filter((value) => value !== null)).toEqual([]);
  });

  it('comes back as it was written', () => {
    const address = {
      view: 'baseline',
      event: 17,
      other: 4,
      set: 3,
      speedC: -0.391234,
      spanMs: 60,
      topMs: 30.5,
      leftMs: -3,
      until: { taiS: 1796136979, ps: 769916059763 },
      class: 'mixed',
      leastFold: 3,
      state: 'final',
      sort: 'margin',
      order: 'up',
      columns: 'time:124,sites:90',
    } as const;
    expect(read(writeDeskAddress(address))).toEqual(address);
  });

  it.each<Readonly<Record<string, string>>>([
    { view: 'other' },
    { event: '0' },
    { event: '1e3' },
    { speed: '1' },
    { span: 'x' },
    { until: 'now' },
    { columns: '<a>' },
  ])('leaves out what cannot be: %j', (fields) => expect(read(fields)).toEqual(read({})));
});
