/** Three sites on the axes of the Earth, in TAI, with exact clocks and an error of 10 ns: whatever is given replaces a field of the file. */
export function smallNetwork(more: Readonly<Record<string, unknown>> = {}): Record<string, unknown> {
  const site = (code: string, itrs_m: readonly number[]) => ({
    code,
    scale: 'TAI',
    clock: 'exact',
    reading_sigma_ns: 10,
    position: { itrs_m },
  });
  return {
    network: 'Three axes',
    run: { name: 'first', from: '2020-01-01T00:00:00 TAI' },
    sites: [site('A', [6378137, 0, 0]), site('B', [0, 6378137, 0]), site('C', [0, 0, 6356752])],
    rule: { code: 'light2', window: { kind: 'light-time' } },
    ...more,
  };
}
