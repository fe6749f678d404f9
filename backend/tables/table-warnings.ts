import { S_PER_DAY } from '#shared/constants';
import { type Warning } from '#shared/contract/setup-leaves';
import { createTaiWriter } from '#shared/time/format';
import { compareInstants, secondsBetween, type Instant } from '#shared/time/instant';
import { type LeapSecondTable } from '#shared/time/leap-seconds';

const MJD_OF_1970 = 40_587;
/** From so many days before a list expires, every screen says so. */
const DAYS_AHEAD = 30;
const DATE = 'YYYY-MM-DD'.length;

/** What is doubtful at present about a leap-second list. */
export function leapSecondWarnings({ expires }: Pick<LeapSecondTable, 'expires'>, present: Instant): Warning[] {
  const day = createTaiWriter(0)(expires).slice(0, DATE);
  if (compareInstants(present, expires) >= 0)
    return [{ where: 'leap seconds', text: `the list expired on ${day}: UTC may be 1 s off since; load a newer list` }];
  const days = Math.floor(secondsBetween(present, expires) / S_PER_DAY);
  if (days >= DAYS_AHEAD) return [];
  return [{ where: 'leap seconds', text: `the list expires on ${day}, in ${days} days: load a newer list before` }];
}

/** The days of an Earth-orientation table. */
interface Days {
  readonly firstMjd: number;
  readonly lastMjd: number;
  readonly predictedFromMjd: number | null;
}

/** What is doubtful at present about an Earth-orientation table, or about having none. */
export function orientationWarnings(days: Days | null, present: Instant): Warning[] {
  const where = 'earth orientation';
  if (!days)
    return [
      {
        where,
        text: 'no Earth-orientation table is loaded: directions of baselines are up to 14 arcseconds off; load an IERS finals2000A file',
      },
    ];
  const mjd = Math.floor(present.taiS / S_PER_DAY) + MJD_OF_1970;
  const { firstMjd, lastMjd, predictedFromMjd } = days;
  if (mjd < firstMjd)
    return [{ where, text: `the table begins on MJD ${firstMjd}, and today is MJD ${mjd}: before it its first values are held` }];
  if (mjd > lastMjd)
    return [{ where, text: `the table ended on MJD ${lastMjd}, and today is MJD ${mjd}: its last values are held; load a newer one` }];
  if (predictedFromMjd !== null && mjd >= predictedFromMjd)
    return [{ where, text: `the values are a prediction from MJD ${predictedFromMjd} on, and today is MJD ${mjd}; load a newer table` }];
  return [];
}
