/** The middle of some figures. */
export function median(figures: readonly number[]): number {
  const sorted = figures.toSorted((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 === 1 ? (sorted[middle] ?? NaN) : ((sorted[middle - 1] ?? NaN) + (sorted[middle] ?? NaN)) / 2;
}

/** CPU that this process has taken so far, ms: a machine that others share lengthens waits, not this. */
export const cpuMs = (): number => {
  const { user, system } = process.cpuUsage();
  return (user + system) / 1e3;
};

/** Runs pieces of work in turn, A B C A B C ..., and gives each one's CPU in ms; the first round warms up and does not count. */
export function inTurn(rounds: number, works: readonly (() => void)[]): readonly (readonly number[])[] {
  const times = works.map((): number[] => []);
  for (let round = 0; round <= rounds; round++) {
    works.forEach((work, at) => {
      const started = cpuMs();
      work();
      if (round > 0) times[at]?.push(cpuMs() - started);
    });
  }
  return times;
}

/** The median of the ratios a/b of runs made in turn, with the least and the greatest. */
export function ratioText(a: readonly number[], b: readonly number[]): string {
  const ratios = a.map((time, at) => time / (b[at] ?? NaN));
  return `${median(ratios).toFixed(2)} (${Math.min(...ratios).toFixed(2)} to ${Math.max(...ratios).toFixed(2)})`;
}

/** The figure that so many of a hundred are below. */
export function percentile(figures: readonly number[], per100: number): number {
  const sorted = figures.toSorted((a, b) => a - b);
  return sorted[Math.min(sorted.length - 1, Math.floor((per100 / 100) * sorted.length))] ?? NaN;
}
