import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type Neighbourhood, searchCliques } from './clique-search';

interface Site {
  readonly later: number;
  readonly earlier?: number;
}

/** Rows of sites one after the other: of each site its later rows, then its earlier ones; two rows of one site are never near. */
function graphOf(sites: readonly Site[], near: (a: number, b: number) => boolean = () => true): Neighbourhood {
  const rows = sites.flatMap(({ later, earlier = 0 }, site) => [
    ...Array.from({ length: later }, () => ({ site, isLater: true })),
    ...Array.from({ length: earlier }, () => ({ site, isLater: false })),
  ]);
  const rowsWhere = (isLater: boolean): Int32Array => Int32Array.from(rows.flatMap((row, k) => (row.isLater === isLater ? [k] : [])));
  return {
    later: rowsWhere(true),
    earlier: rowsWhere(false),
    siteOf: (row) => rows[row]!.site,
    near: (a, b) => rows[a]!.site !== rows[b]!.site && near(Math.min(a, b), Math.max(a, b)),
  };
}

function setsOf(graph: Neighbourhood, leastOthers = 1, limit = 1e6): { readonly count: number; readonly sets: string[] } {
  const sets: string[] = [];
  const found = (others: Int32Array, length: number): void => void sets.push(others.slice(0, length).sort().join());
  const count = searchCliques(graph, { leastOthers, limit, found });
  return { count, sets: sets.sort() };
}

describe('searchCliques', () => {
  it('finds nothing among no rows, and one set with one row', () => {
    expect(setsOf(graphOf([])).count).toBe(0);
    expect(setsOf(graphOf([{ later: 1 }]))).toEqual({ count: 1, sets: ['0'] });
  });

  it('lists just the limit, and ends with one past it', () => {
    expect(setsOf(graphOf([{ later: 3 }, { later: 4 }]), 1, 12)).toMatchObject({ count: 12 });
    const past = setsOf(graphOf([{ later: 3 }, { later: 4 }]), 1, 11);
    expect(past.count).toBe(12);
    expect(past.sets).toHaveLength(11);
  });

  it('leaves out sets below the fold, and those that an earlier row is near', () => {
    expect(setsOf(graphOf([{ later: 2 }, { later: 2 }]), 3).count).toBe(0);
    expect(setsOf(graphOf([{ later: 2 }, { later: 2 }, { later: 0, earlier: 1 }])).count).toBe(0);
    // The earlier row 4 is near row 0 alone of the first site.
    expect(setsOf(graphOf([{ later: 2 }, { later: 2 }, { later: 0, earlier: 1 }], (a, b) => b !== 4 || a !== 1)).sets).toEqual([
      '1,2',
      '1,3',
    ]);
  });
});

// More than 512 rows are searched by lists before they fit a matrix; what they must give is known by counting.
describe('searchCliques among many rows', () => {
  it('finds the product of the sites where all are near', () => {
    expect(setsOf(graphOf([{ later: 300 }, { later: 300 }])).count).toBe(90_000);
    expect(setsOf(graphOf([{ later: 600 }])).count).toBe(600);
    expect(setsOf(graphOf([{ later: 500 }, { later: 20 }, { later: 3 }])).count).toBe(30_000);
  });

  it('finds the product less the pairs that are not near', () => {
    expect(setsOf(graphOf([{ later: 300 }, { later: 300 }], (a, b) => b - a !== 300)).count).toBe(300 * 299);
  });

  it('leaves out what earlier rows are near, few or many', () => {
    const graph = (earlier: number) =>
      graphOf([{ later: 300 }, { later: 300 }, { later: 0, earlier }], (a, b) => b < 600 || a < 10 || a >= 300);
    for (const earlier of [1, 700]) expect(setsOf(graph(earlier)).count).toBe(290 * 300);
  });

  it('leaves out of a single site what an earlier row of another is near', () => {
    expect(setsOf(graphOf([{ later: 600 }, { later: 0, earlier: 1 }], (a) => a < 100)).count).toBe(500);
  });

  it('leaves out what each of many different earlier rows is near', () => {
    // Row 40 + k of the third site is near row k mod 10 of the first, and all of the second.
    const near = (a: number, b: number): boolean => b < 40 || a >= 20 || a === (b - 40) % 10;
    expect(setsOf(graphOf([{ later: 20 }, { later: 20 }, { later: 0, earlier: 600 }], near)).count).toBe(10 * 20);
  });

  it('looks at thousands of earlier rows of a storm no more than once for each row after them', () => {
    let asked = 0;
    const graph = graphOf(Array.from({ length: 5 }, () => ({ later: 5, earlier: 2_000 })));
    const counted = (a: number, b: number): boolean => {
      asked++;
      return graph.near(a, b);
    };
    expect(setsOf({ ...graph, near: counted }).count).toBe(3_125);
    expect(asked).toBeLessThanOrEqual(2 * 25 * 10_025);
  });

  it('finds the same by lists as by the matrix, in any graph', () => {
    const site = fc.record({ later: fc.integer({ min: 0, max: 6 }), earlier: fc.integer({ min: 0, max: 4 }) });
    fc.assert(
      fc.property(
        fc.array(site, { minLength: 2, maxLength: 5 }),
        fc.array(fc.boolean(), { minLength: 64, maxLength: 64 }),
        (sites, bits) => {
          const near = (a: number, b: number): boolean => bits[(a * 31 + b * 17) % 64]!;
          const small = graphOf(sites, near);
          const count = small.later.length + small.earlier.length;
          // Candidates that are near nothing: each is a set by itself, and they take the graph past the matrix.
          const large = graphOf([...sites, { later: 600 }], (a, b) => b < count && near(a, b));
          const alone = Array.from({ length: 600 }, (_, k) => `${count + k}`);
          expect(setsOf(large).sets).toEqual([...setsOf(small).sets, ...alone].sort());
        },
      ),
    );
  });
});
