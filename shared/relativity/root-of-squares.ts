/**
 * The root of the sum of two squares, as standard errors add up; 2e-16 relative for sizes between 1e-150 and 1e150.
 *
 * Math.hypot guards against sizes beyond those and takes ten times as long, which counts where millions of pairs are written.
 */
export const rootOfSquares = (a: number, b: number): number => Math.sqrt(a * a + b * b);
