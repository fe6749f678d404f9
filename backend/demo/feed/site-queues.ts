import { type SiteRecord } from '#shared/contract/site-record';
import { addPicoseconds, compareInstants, type Instant } from '#shared/time/instant';
import { countBetween, startOfSlice, writeSlice, type Written } from '../stream/slice';
import { type World } from '../stream/world';
import { type Resumed } from './session';

const CLOCK_ERROR_PS = 1e9; // a site knows the time by its own clock, and no clock of the demo is off by a millisecond

/** What a site sends at a time. */
export interface Due {
  readonly records: readonly SiteRecord[];
  /** All that it has before this instant is sent with these. */
  readonly completeTo: Instant;
}

/** What the sites have written and not sent yet. */
export interface SiteQueues {
  /**
   * Takes what a site sends by now.
   *
   * @param code of the site
   * @param now the present
   */
  readonly take: (code: string, now: Instant) => Due;
}

/** What lies in the queue of a site whose link is down grows to some hundred records: no link is down for longer than a minute. */
type Queue = Written[];

/**
 * Makes the queues of a stream, which write slice after slice as the present reaches it.
 *
 * @param world what is seen
 * @param resumed from where on, and how the records are numbered
 */
export function siteQueues(world: World, { session, fromSlice }: Resumed): SiteQueues {
  const queues = new Map<string, Queue>([...world.sites.keys()].map((code) => [code, []]));
  const counts = countBetween(world, session.firstSlice, fromSlice);
  let nextSlice = fromSlice;
  const writeUpTo = (now: Instant): void => {
    for (; compareInstants(startOfSlice(world, nextSlice), now) <= 0; nextSlice += 1)
      for (const written of writeSlice(world, nextSlice, counts, session.series)) queues.get(written.site)?.push(written);
  };
  return {
    take: (code, now) => {
      writeUpTo(now);
      const queue = queues.get(code) ?? [];
      const isDue = ({ at, lateS }: Written): boolean => compareInstants(addPicoseconds(at, Math.round(lateS * 1e12)), now) <= 0;
      const left = queue.filter((one) => !isDue(one));
      const records = queue.filter(isDue).map(({ record }) => record);
      queues.set(code, left);
      const [first] = left; // in the order of time
      const sent = first && compareInstants(first.at, now) < 0 ? first.at : now;
      return { records, completeTo: addPicoseconds(sent, -CLOCK_ERROR_PS) };
    },
  };
}
