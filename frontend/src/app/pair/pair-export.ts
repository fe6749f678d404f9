import { type PairAnswers } from './pair-store';

/** What a file says of its numbers. */
const CONVENTIONS = {
  interval: 's^2 = (c dt)^2 - distance^2, m^2; positive = timelike',
  margin: '(c dt - distance) / c in its own standard errors; positive = timelike',
  frames: 'geocentric inertial, GCRS axes; velocities in c as gamma and gamma times beta; frames are those of special relativity',
  times: 'TAI, whole seconds since 1970-01-01T00:00:00 TAI and picoseconds within the second',
} as const;

/** A pair with all that it rests on as JSON: the server's own numbers with all their digits. */
export const pairJson = ({ set, events, sets }: PairAnswers, link: string): string =>
  `${JSON.stringify(
    {
      link,
      conventions: CONVENTIONS,
      ...set,
      records: events,
      coincidences: sets?.map(({ id, name, rule, state, fold }) => ({ id, name, rule, state, fold })) ?? null,
    },
    null,
    2,
  )}\n`;
