import { margin, plain, timeText, withUnit } from '../desk/figures';
import { type PairSeen } from './pair-seen';

/** A figure that is another than it was. */
export interface ChangedFigure {
  readonly what: string;
  readonly was: string;
  readonly now: string;
}

const FIGURES: readonly { readonly what: string; readonly of: (seen: PairSeen) => string; readonly exact: (seen: PairSeen) => unknown }[] =
  [
    { what: 'class', of: ({ pair }) => pair.class, exact: ({ pair }) => pair.class },
    { what: 'first', of: ({ a }) => a.name, exact: ({ a }) => a.id },
    { what: 'margin', of: ({ pair }) => margin(pair.marginSigma), exact: ({ pair }) => pair.marginSigma },
    { what: 'time between them', of: ({ pair }) => timeText(pair.dtNs), exact: ({ pair }) => pair.dtNs },
    { what: 'its error', of: ({ pair }) => timeText(pair.sigmaDtNs), exact: ({ pair }) => pair.sigmaDtNs },
    { what: 'distance', of: ({ pair }) => withUnit(plain(pair.distanceM, 3), 'm'), exact: ({ pair }) => pair.distanceM },
  ];

/** What a pair's page shows otherwise than before; with all digits it is compared, printed as the page prints it. */
export const changedFigures = (was: PairSeen, now: PairSeen): readonly ChangedFigure[] =>
  FIGURES.filter(({ exact }) => exact(was) !== exact(now)).map(({ what, of }) => ({ what, was: of(was), now: of(now) }));
