import { inject, Injectable, signal } from '@angular/core';
import { type CoincidenceBrief } from '#shared/contract/coincidence';
import { PAIR_ROUTES, type PairInFull, type PairsOfSet } from '#shared/contract/pair-routes';
import { ApiClient } from '../api/api-client';
import { NetworkStore } from '../networks/network-store';

const MOST_AT_ONCE = 3;
const MOST_KEPT = 400;

/** What a coincidence's row says of a frame: how many of its pairs have another order there than in the geocentric one, and how many are ties. */
export interface OrderThere {
  readonly turned: number;
  readonly ties: number;
  /** Its sites in the order of that frame. */
  readonly sites: string;
}

/** What a coincidence's row says of its pairs: the one nearest to the light cone, and the order in each frame. */
export interface SetPairs {
  readonly nearest: PairInFull;
  readonly sigmas: number;
  readonly orders: ReadonlyMap<string, OrderThere>;
}

/** Pairs of the coincidences whose rows are seen, asked for when they are, a few at once. */
@Injectable()
export class SetOrders {
  private readonly api = inject(ApiClient);
  private readonly networks = inject(NetworkStore);
  private readonly kept = signal<ReadonlyMap<number, SetPairs>>(new Map());
  /** For which frames each was asked. */
  private readonly asked = new Map<number, string>();
  private waiting: { readonly set: CoincidenceBrief; readonly frames: readonly string[] }[] = [];
  private running = 0;
  readonly pairs = this.kept.asReadonly();

  /** Asks for what is not there yet of the rows that are seen now. */
  want(sets: readonly CoincidenceBrief[], frames: readonly string[]): void {
    this.waiting = sets.filter(({ id, fold }) => this.asked.get(id) !== frames.join() && fold <= 50).map((set) => ({ set, frames }));
    this.go();
  }

  forget(): void {
    this.asked.clear();
    this.kept.set(new Map());
  }

  private go(): void {
    while (this.running < MOST_AT_ONCE) {
      const next = this.waiting.shift();
      if (!next) return;
      this.asked.set(next.set.id, next.frames.join());
      this.running++;
      void this.ask(next.set, next.frames).finally(() => {
        this.running--;
        this.go();
      });
    }
  }

  private async ask({ id, members }: CoincidenceBrief, frames: readonly string[]): Promise<void> {
    const networkId = this.networks.network()?.id ?? 0;
    const query = { events: members.map(({ eventId }) => eventId).join(','), frames: ['geocentric', ...frames].join(',') };
    try {
      // The client writes what a query holds as text; the types say what the server reads it as.
      const answer = await this.api.call(PAIR_ROUTES.readPairs, { params: { networkId }, query: query as never });
      const pairs = setPairs(answer);
      // Not what was asked before the frames changed: it may come after what was asked since.
      if (pairs && this.asked.get(id) === frames.join()) this.kept.update((kept) => new Map([...[...kept].slice(-MOST_KEPT), [id, pairs]]));
    } catch {
      if (this.asked.get(id) === frames.join()) this.asked.delete(id); // of an event that is gone since; the row goes with the next news
    }
  }
}

/** What a row says of an answer, whose first frame is the geocentric one; undefined where there is no pair. */
export function setPairs({ events, frames, pairs, sigmas }: PairsOfSet): SetPairs | undefined {
  const nearest = pairs.reduce<PairInFull | undefined>(
    (best, pair) => (best && Math.abs(Number(best.marginSigma)) <= Math.abs(Number(pair.marginSigma)) ? best : pair),
    undefined,
  );
  if (!nearest) return undefined;
  const orders = frames.map(({ code }, at): [string, OrderThere] => {
    const times = events.map((_, i) => (i === 0 ? 0 : (pairs.find(({ a, b }) => a === 1 && b === i + 1)?.orders[at]?.dtNs ?? 0)));
    const inOrder = events.map((_, i) => i).sort((a, b) => (times[a] ?? 0) - (times[b] ?? 0));
    return [
      code,
      {
        turned: pairs.filter(({ orders: there }) => isOther(there[at]?.order, there[0]?.order)).length,
        ties: pairs.filter(({ orders: there }) => there[at]?.order === 'tie').length,
        sites: inOrder.map((i) => events[i]?.site ?? '').join(' '),
      },
    ];
  });
  return { nearest, sigmas, orders: new Map(orders) };
}

const isOther = (there: string | undefined, here: string | undefined): boolean => there !== here && there !== 'tie' && here !== 'tie';
