import { describe, expect, it } from 'vitest';
import { errorBudget, sharedWords } from './error-budget';
import { frameRows } from './frame-rows';
import { changedFigures } from './pair-changes';
import { neighboursOf } from './pair-neighbours';
import { pairSeen } from './pair-seen';
import { seenOf, setOf } from './pair.samples';
import { explanation, textOf, verdictSentence } from './pair-words';

describe('a pair in words', () => {
  it('is of an order that depends on the frame, with the least speed that turns it', () => {
    const seen = seenOf({ class: 'spacelike', dtNs: 14_207_000, lightMs: 36.354 });
    expect(verdictSentence(seen)).toBe('Order depends on the frame.');
    expect(textOf(explanation(seen, 'Hallow Ridge', 'Tern Shoal'))).toBe(
      'In the geocentric frame, Hallow Ridge triggers 14.207\u00a0ms before Tern Shoal. Light needs 36.354\u00a0ms from the one to the other, so neither ' +
        'can be the cause of the other. Turning speed 0.391 c, counted from the geocentric frame: in frames that move from AAA toward BBB faster ' +
        'than that, Tern Shoal comes first.',
    );
  });

  it('slants the times of the geocentric frame, and nothing that is the same in every frame', () => {
    const seen = seenOf({ class: 'spacelike', dtNs: 14_207_000, lightMs: 36.354 });
    const slanted = explanation(seen, 'A', 'B').filter((phrase) => phrase.slanted);
    expect(slanted.map(({ text }) => text)).toEqual(['14.207\u00a0ms', '36.354\u00a0ms']);
  });

  it('names who comes first where that is so in every frame', () => {
    const seen = seenOf({ class: 'timelike', dtNs: 40_000_000, lightMs: 36 });
    expect(verdictSentence(seen)).toBe('AAA comes first in every frame.');
    expect(textOf(explanation(seen, 'A', 'B'))).toContain('so the first may have caused the second. No frame has B first.');
  });

  it('says what is undecided by how much, and what is certain all the same', () => {
    const seen = seenOf({ class: 'undecided', dtNs: 35_070_000, lightMs: 36, sigmaNs: 660_000, reverse: 107.7 });
    expect(verdictSentence(seen)).toBe('Undecided at 3 sigma: the timing error is 660.00\u00a0\u00b5s, the gap 930.00\u00a0\u00b5s.');
    expect(textOf(explanation(seen, 'A', 'B'))).toContain(
      'That B did not cause A is certain all the same: the reverse margin is +107.7\u00a0\u03c3.',
    );
    const near = seenOf({ class: 'undecided', dtNs: 1, lightMs: 1e-6, sigmaNs: 10, reverse: 0.2 });
    expect(textOf(explanation(near, 'A', 'B'))).toContain(
      'Nor is it certain that B did not cause A: the reverse margin is +0.2\u00a0\u03c3.',
    );
  });

  it('calls two events of one site by their own names', () => {
    const seen = seenOf({ class: 'timelike', dtNs: 2e9, lightMs: 2e-6, site: 'AAA' });
    expect(verdictSentence(seen)).toBe('AAA:1 comes first in every frame.');
    expect(textOf(explanation(seen, 'AAA:1', 'BBB:2'))).toContain(
      'Both are of AAA, which the turning Earth carried 599.58\u00a0mm on meanwhile.',
    );
  });
});

describe('where an undecided pair would turn', () => {
  it('is at c dt / d with the error of both', () => {
    // sqrt(3^2 + 0.5^2 4^2) / 100 by hand.
    const seen = seenOf({ class: 'undecided', dtNs: 50, lightMs: 1e-4, sigmaNs: 3, distanceSigmaNs: 4 });
    expect(seen.turning?.speedC).toBeCloseTo(0.5, 12);
    expect(seen.turning?.sigmaC).toBeCloseTo(Math.sqrt(9 + 4) / 100, 12);
  });

  it('is nowhere when light is faster, and nowhere when the pair is timelike', () => {
    expect(seenOf({ class: 'undecided', dtNs: 101, lightMs: 1e-4 }).turning).toBeUndefined();
    expect(seenOf({ class: 'timelike', dtNs: 101, lightMs: 1e-4 }).turning).toBeUndefined();
  });

  it('has no direction where both are at one place', () =>
    expect(seenOf({ class: 'timelike', dtNs: 5, lightMs: 0 }).toward).toBeUndefined());
});

describe('the error budget', () => {
  const { pair } = seenOf({ class: 'spacelike', dtNs: 10, lightMs: 1, sigmaNs: 5 });

  it('gives each term its share of the whole', () => {
    const terms = [{ name: 'reading-a', sigmaNs: 3 }, { name: 'reading-b', sigmaNs: 4 }] as const; // prettier-ignore
    expect(errorBudget({ ...pair, terms: [...terms] }, 'AAA', 'BBB')).toEqual([
      { label: 'Reading, AAA', sigmaNs: 3, share: 0.6 },
      { label: 'Reading, BBB', sigmaNs: 4, share: 0.8 },
    ]);
  });

  it('says what cancels, and nothing of a reference that nobody has', () => {
    const seen = seenOf({ class: 'timelike', dtNs: 10, lightMs: 0, site: 'AAA' });
    const one = { ...seen, pair: { ...seen.pair, terms: [{ name: 'rate' as const, sigmaNs: 1 }] } };
    expect(sharedWords(one)).toBe(
      'Both share the cable delay of their site and the offset of their one clock segment: that error cancels.',
    );
    const apart = ['delay-a', 'delay-b', 'reference-a', 'reference-b'] as const;
    expect(sharedWords({ ...seen, pair: { ...seen.pair, terms: apart.map((name) => ({ name, sigmaNs: 1 })) } })).toBe('');
  });
});

describe('orders frame by frame', () => {
  it('begin with the geocentric frame, and count speeds along the baseline', () => {
    const set = setOf({ class: 'spacelike', dtNs: 10, lightMs: 1 });
    const seen = pairSeen(set);
    const rows = seen ? frameRows(set, seen, []) : [];
    // 0.6 c along x has gamma 1.25; half of the way across it counts nothing along the baseline.
    expect(rows.map(({ code, note, alongC, order }) => ({ code, note, alongC: Number(alongC.toFixed(12)), order }))).toEqual([
      { code: 'geocentric', note: 'non-rotating', alongC: 0, order: 'a' },
      { code: 'across', note: '0.600\u00a0c', alongC: 0, order: 'tie' },
      { code: 'along', note: '0.600\u00a0c', alongC: 0.6, order: 'b' },
    ]);
  });
});

describe('figures that have changed', () => {
  const was = seenOf({ class: 'spacelike', dtNs: 10_000_000, lightMs: 36 });

  it('are none while all digits are the same', () => expect(changedFigures(was, structuredClone(was))).toEqual([]));

  it('stand with what they were', () => {
    const now = { ...was, pair: { ...was.pair, dtNs: 10_250_000 } };
    expect(changedFigures(was, now)).toEqual([{ what: 'time between them', was: '10.000\u00a0ms', now: '10.250\u00a0ms' }]);
  });
});

describe('the pairs of a coincidence', () => {
  const members = [1, 2, 3].map((place) => ({ place, eventId: place * 10 }));
  const pairs = [[1, 2], [1, 3], [2, 3]].map(([a, b]) => ({ a, b })); // prettier-ignore
  // What is asked of a coincidence here are its places alone.
  const set = { members, pairs } as unknown as Parameters<typeof neighboursOf>[0];

  it('are walked in their order, whichever event is named first', () => {
    expect(neighboursOf(set, 30, 10)).toEqual({
      place: 2,
      count: 3,
      before: { eventA: 10, eventB: 20 },
      behind: { eventA: 20, eventB: 30 },
    });
    expect(neighboursOf(set, 10, 20)?.before).toBeUndefined();
    expect(neighboursOf(set, 20, 30)?.behind).toBeUndefined();
  });

  it('are not those of another one', () => expect(neighboursOf(set, 10, 40)).toBeUndefined());
});
