import { describe, expect, it } from 'vitest';
import { CANDIDATE_STATES, judgeMove, MOVE_NAMES, RELATIONS, stateBySignatures } from './candidate-moves';

const EVERYONE = 'author analyst reviewer reader coordinator';

/** Who may make each move from each state, written down by hand and apart from the table: `state+` is the state out of date. */
const EXPECTED: Readonly<Record<string, Readonly<Record<string, string>>>> = {
  edit: {
    ...{ draft: 'author analyst', 'draft+': 'author analyst' },
    ...{ 'in-review': '', 'in-review+': 'author analyst' },
    ...{ confirmed: '', 'confirmed+': 'author analyst' },
    ...{ disputed: 'author analyst', 'disputed+': 'author analyst' },
    ...{ withdrawn: '', 'withdrawn+': '' },
  },
  submit: {
    ...{ draft: 'author', 'draft+': 'author' },
    ...{ 'in-review': '', 'in-review+': 'author' },
    ...{ confirmed: '', 'confirmed+': 'author' },
    ...{ disputed: 'author', 'disputed+': 'author' },
    ...{ withdrawn: '', 'withdrawn+': '' },
  },
  'name-reviewers': {
    ...{ draft: 'author coordinator', 'draft+': 'author coordinator' },
    ...{ 'in-review': 'author coordinator', 'in-review+': 'author coordinator' },
    ...{ confirmed: 'author coordinator', 'confirmed+': 'author coordinator' },
    ...{ disputed: 'author coordinator', 'disputed+': 'author coordinator' },
    ...{ withdrawn: '', 'withdrawn+': '' },
  },
  sign: {
    ...{ draft: '', 'draft+': '' },
    ...{ 'in-review': 'reviewer', 'in-review+': '' },
    ...{ confirmed: 'reviewer', 'confirmed+': '' },
    ...{ disputed: 'reviewer', 'disputed+': '' },
    ...{ withdrawn: '', 'withdrawn+': '' },
  },
  'withdraw-signature': {
    ...{ draft: '', 'draft+': '' },
    ...{ 'in-review': 'reviewer', 'in-review+': 'reviewer' },
    ...{ confirmed: 'reviewer', 'confirmed+': 'reviewer' },
    ...{ disputed: 'reviewer', 'disputed+': 'reviewer' },
    ...{ withdrawn: '', 'withdrawn+': '' },
  },
  comment: {
    ...{ draft: EVERYONE, 'draft+': EVERYONE },
    ...{ 'in-review': EVERYONE, 'in-review+': EVERYONE },
    ...{ confirmed: EVERYONE, 'confirmed+': EVERYONE },
    ...{ disputed: EVERYONE, 'disputed+': EVERYONE },
    ...{ withdrawn: '', 'withdrawn+': '' },
  },
  withdraw: {
    ...{ draft: 'author coordinator', 'draft+': 'author coordinator' },
    ...{ 'in-review': 'author coordinator', 'in-review+': 'author coordinator' },
    ...{ confirmed: 'author coordinator', 'confirmed+': 'author coordinator' },
    ...{ disputed: 'author coordinator', 'disputed+': 'author coordinator' },
    ...{ withdrawn: '', 'withdrawn+': '' },
  },
};

describe('28 the table of moves', () => {
  it('has each move that is written down here, and no other', () => {
    expect([...MOVE_NAMES].sort()).toEqual(Object.keys(EXPECTED).sort());
  });

  const cells = MOVE_NAMES.flatMap((name) =>
    CANDIDATE_STATES.flatMap((state) =>
      [false, true].flatMap((isOutOfDate) => RELATIONS.map((relation) => ({ name, state, isOutOfDate, relation }))),
    ),
  );
  it.each(cells)('$name from $state (out of date: $isOutOfDate) by $relation', ({ name, state, isOutOfDate, relation }) => {
    const who = EXPECTED[name]![`${state}${isOutOfDate ? '+' : ''}`]!.split(' ');
    const ever = Object.values(EXPECTED[name]!).some((words) => words.split(' ').includes(relation));
    expect(judgeMove(name, { state, isOutOfDate }, [relation])).toBe(who.includes(relation) ? 'allowed' : ever ? 'not-now' : 'not-theirs');
  });

  it('lets someone who is several things do what any of them may, and a stranger nothing', () => {
    const draft = { state: 'draft', isOutOfDate: false } as const;
    expect(judgeMove('withdraw', draft, ['analyst', 'coordinator'])).toBe('allowed');
    for (const name of MOVE_NAMES) expect(judgeMove(name, draft, [])).toBe('not-theirs');
  });
});

describe('the state by the signatures', () => {
  const signed = (decision: 'confirm' | 'dispute', more: { isWithdrawn?: boolean; isSuperseded?: boolean } = {}) => ({
    decision,
    isWithdrawn: false,
    isSuperseded: false,
    ...more,
  });
  it.each([
    ['in-review', []],
    ['in-review', [signed('confirm')]],
    ['confirmed', [signed('confirm'), signed('confirm')]],
    ['in-review', [signed('confirm'), signed('confirm', { isWithdrawn: true })]],
    ['in-review', [signed('confirm'), signed('confirm', { isSuperseded: true })]],
    ['disputed', [signed('confirm'), signed('confirm'), signed('dispute')]],
    ['in-review', [signed('confirm'), signed('dispute', { isWithdrawn: true })]],
    ['disputed', [signed('confirm'), signed('dispute', { isSuperseded: true }), signed('confirm')]],
  ] as const)('is %s where two are needed: %j', (state, signatures) => {
    expect(stateBySignatures(signatures, 2)).toBe(state);
  });
});
