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
