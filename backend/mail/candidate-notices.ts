import { type OutOfDate } from '#shared/contract/review-routes';
import { letter, type Letter } from './letters';
import { choice, type Noticed, timeWords } from './notices';

/** A candidate as mails name it. */
interface CandidateTold {
  readonly network: string;
  readonly number: number;
  readonly title: string;
}

/**
 * Tells someone that they are mentioned in a comment on a candidate.
 *
 * @param told which candidate, who wrote the comment, and its text
 */
export const mentioned = (
  { receiver, origin, at }: Noticed,
  { network, number, title, by, text }: CandidateTold & { readonly by: string; readonly text: string },
): Letter =>
  letter('mention', receiver, `You are mentioned on candidate ${number} of ${network}`, [
    `${by} mentions you in a comment on a candidate at Skewline.`,
    {
      facts: [
        ['Candidate', `${network} ${number}, ${title}`],
        ['When', timeWords(at)],
        ['Comment', text],
      ],
    },
    ...choice(origin),
  ]);

/** How many differences a mail tells. */
const MOST_TOLD = 10;

const CAUSE_WORDS: Readonly<Record<OutOfDate['cause'], string>> = {
  'clock-record': 'a clock record',
  site: "a site's place, delay or clock",
  rule: 'a rule',
  frame: 'a frame',
  'time-table': 'the leap-second list',
  'earth-table': 'the Earth-orientation table',
  'late-record': 'a record that came late',
  conflict: 'a record that does not stand any more',
};

/**
 * Tells someone that a candidate's numbers are not those that were frozen any more.
 *
 * @param told which candidate, what changed, and the numbers that are others now
 */
export const outOfDate = (
  { receiver, origin, at }: Noticed,
  { network, number, title, cause, differences }: CandidateTold & Pick<OutOfDate, 'cause' | 'differences'>,
): Letter =>
  letter('out-of-date', receiver, `Candidate ${number} of ${network} is out of date`, [
    'what a candidate at Skewline was computed from has changed, and with it numbers that its claims rest on. Its snapshot and signatures stand as they were; its author can submit it anew.',
    {
      facts: [
        ['Candidate', `${network} ${number}, ${title}`],
        ['When', timeWords(at)],
        ['What changed', CAUSE_WORDS[cause]],
        ['Numbers changed', String(differences.length)],
        ...differences.slice(0, MOST_TOLD).map(({ where, was, is }) => [where, `${was ?? 'nothing'}, now ${is ?? 'nothing'}`] as const),
      ],
    },
    ...choice(origin),
  ]);
