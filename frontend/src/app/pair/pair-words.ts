import { margin, timeText } from '../desk/figures';
import { lengthText } from './pair-figures';
import { type PairSeen, shortNames } from './pair-seen';

/** A piece of a sentence; slanted where what it says changes with the frame. */
export interface Phrase {
  readonly text: string;
  readonly slanted?: boolean;
}

/** What can be said of a pair's order, as a sentence. */
export function verdictSentence(seen: PairSeen): string {
  const { pair, sigmas, lightNs } = seen;
  const [first] = shortNames(seen);
  if (pair.class === 'spacelike') return 'Order depends on the frame.';
  if (pair.class === 'timelike') return `${first} comes first in every frame.`;
  if (pair.sigmaGapNs === 0) return 'Undecided: exactly on the light cone.';
  return `Undecided at ${sigmas} sigma: the timing error is ${timeText(pair.sigmaGapNs)}, the gap ${timeText(Math.abs(pair.dtNs - lightNs))}.`;
}

/**
 * What follows from the numbers of a pair, in plain words.
 *
 * @param seen the pair
 * @param nameA the site of the earlier event, as people call it; with one site its event
 * @param nameB the same of the later one
 */
export function explanation(seen: PairSeen, nameA: string, nameB: string): readonly Phrase[] {
  const { pair, lightNs, isOneSite, sigmas, turning } = seen;
  const reverse = Number(pair.reverseMarginSigma);
  const isApart = pair.dtNs > 0;
  const phrases: Phrase[] = [
    { text: `In the geocentric frame, ${nameA} triggers ` },
    ...(isApart
      ? [{ text: timeText(pair.dtNs), slanted: true }, { text: ` before ${nameB}. ` }]
      : [{ text: `at the same instant as ${nameB}. ` }]),
  ];
  if (isOneSite) {
    phrases.push({ text: `Both are of ${seen.a.site}, which the turning Earth carried ` });
    phrases.push({ text: lengthText(pair.distanceM), slanted: true }, { text: ' on meanwhile. ' });
  }
  phrases.push({ text: 'Light needs ' }, { text: timeText(lightNs), slanted: true }, { text: ' from the one to the other' }); // prettier-ignore
  switch (pair.class) {
    case 'spacelike': {
      phrases.push({ text: ', so neither can be the cause of the other. ' });
      if (turning) {
        phrases.push({
          text: `Turning speed ${turning.speedC.toFixed(3)} c, counted from the geocentric frame: in frames that move from `,
        });
        phrases.push({ text: `${shortNames(seen)[0]} toward ${shortNames(seen)[1]} faster than that, ${nameB} comes first.` });
      }
      break;
    }
    case 'timelike':
      phrases.push({ text: `, so the first may have caused the second. No frame has ${nameB} first.` });
      break;
    case 'undecided':
      phrases.push({
        text: ', and the errors are too large to say which is the longer: whether the order depends on the frame stays open. ',
      });
      phrases.push({
        text:
          reverse > sigmas
            ? `That ${nameB} did not cause ${nameA} is certain all the same: the reverse margin is ${margin(reverse)}.`
            : `Nor is it certain that ${nameB} did not cause ${nameA}: the reverse margin is ${margin(reverse)}.`,
      });
  }
  return phrases;
}

/** The same as one text. */
export const textOf = (phrases: readonly Phrase[]): string => phrases.map(({ text }) => text).join('');
