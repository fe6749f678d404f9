import { type Socket } from 'socket.io-client';
import { type NetworkChanged, type NetworkChanges } from '#shared/contract/live-changes';
import { followerOf, type Follower, type jointOf } from '#shared/contract/live-follower';
import { type Client } from '../support/client';
import { ask, browserSocket, hear, linking, type LiveApp, type Standing } from './live-app';

/** A page of either list, as far as a viewer looks at it. */
interface Part {
  readonly items: readonly { readonly id: number; readonly state: string }[];
  readonly next: string | null;
  readonly change: number;
}

/** How a viewer is other than the usual one. */
export interface ViewerWays {
  readonly joint?: typeof jointOf;
  /** Whether a message gets lost on its way. */
  readonly loses?: () => boolean;
}

/** A page that shows all events and coincidences: what it has read, and put over it what it was told. What does not fit is written down. */
export class Viewer {
  readonly faults: string[] = [];
  readonly sums: NetworkChanged[] = [];
  /** How often it took everything anew. */
  wholes = 0;
  socket: Socket;
  private readonly events = new Set<number>();
  private readonly coincidences = new Map<number, string>();
  /** Events told since they were last read. */
  private readonly told = new Set<number>();
  private readonly follower: Follower;
  private had: number | undefined;
  private waiting: NetworkChanges[] = [];
  private isReading = false;
  private lastTold: number | undefined;

  constructor(
    private readonly app: LiveApp,
    private readonly client: Client,
    private readonly ways: ViewerWays = {},
  ) {
    this.socket = browserSocket(app, client);
    const { networkId } = app.network;
    this.follower = followerOf({
      ...(ways.joint && { joint: ways.joint }),
      missed: async (after) => {
        const answer = await ask(this.socket, 'network:missed', { networkId, after });
        if (answer.ok) return answer;
        if (answer.code === 'too-old') return undefined;
        throw new Error(answer.text);
      },
      told: (changes) => this.take(changes),
      anew: () => void this.read(),
      isCatchingUp: () => undefined,
    });
  }

  /** The number up to which it has everything. */
  get number(): number {
    return this.isReading ? -1 : (this.had ?? -1);
  }

  async link(): Promise<void> {
    const { networkId } = this.app.network;
    this.socket = browserSocket(this.app, this.client);
    hear(this.socket, 'network:changed', (news) => {
      if (news.kind === 'sum') this.sums.push(news);
      if (this.ways.loses?.() !== true) this.follower.changed(news);
    });
    const fault = await linking(this.socket);
    if (fault) throw fault;
    const after = this.follower.had();
    const answer = await ask(this.socket, 'network:follow', { networkId, ...(after !== undefined && { after }) });
    if (!answer.ok) throw new Error(answer.text);
    this.follower.begin(answer);
  }

  standing(): Standing {
    const coincidences = [...this.coincidences].sort(([a], [b]) => a - b).map(([id, state]) => `${id} ${state}`);
    return { events: [...this.events].sort((a, b) => a - b), coincidences };
  }

  private take(changes: NetworkChanges): void {
    if (this.lastTold !== undefined && changes.from !== this.lastTold + 1)
      this.faults.push(`after ${this.lastTold} came ${changes.from} to ${changes.to}`);
    this.lastTold = changes.to;
    if (this.isReading) this.waiting.push(changes);
    else this.put(changes);
  }

  /** Puts changes over what is shown; those up to `readAt` may be in it already, and are put all the same, since not every page held them. */
  private put({ from, to, events, coincidences }: NetworkChanges, readAt = 0): void {
    if (this.had === undefined || to <= this.had) return;
    if (events.isCut || coincidences.isCut) {
      void this.read();
      return;
    }
    const overlaps = from <= Math.max(this.had, readAt);
    this.had = to;
    for (const { id } of events.items) {
      if (this.told.has(id)) this.faults.push(`the event ${id} was told twice`);
      this.told.add(id);
      if (!overlaps && this.events.has(id)) this.faults.push(`the event ${id} was read, and told again`);
      this.events.add(id);
    }
    for (const id of events.gone) this.events.delete(id);
    for (const { id, state } of coincidences.items) this.coincidences.set(id, state);
    for (const id of coincidences.final) if (this.coincidences.has(id)) this.coincidences.set(id, 'final');
    for (const id of coincidences.ended) this.coincidences.delete(id);
  }

  private async read(): Promise<void> {
    this.isReading = true;
    this.lastTold = undefined;
    this.waiting = [];
    this.wholes++;
    const { networkId } = this.app.network;
    const events = await this.all(`/networks/${networkId}/events`);
    const coincidences = await this.all(`/networks/${networkId}/coincidences`);
    this.events.clear();
    this.coincidences.clear();
    this.told.clear();
    for (const { id } of events.items) this.events.add(id);
    for (const { id, state } of coincidences.items) this.coincidences.set(id, state);
    this.had = Math.min(events.change, coincidences.change);
    this.isReading = false;
    const waiting = this.waiting;
    this.waiting = [];
    // What lies between the oldest and the newest page may be in what was read already.
    for (const changes of waiting) this.put(changes, Math.max(events.newest, coincidences.newest));
  }

  private async all(path: string): Promise<Pick<Part, 'items' | 'change'> & { readonly newest: number }> {
    const items: Part['items'][number][] = [];
    let change = Infinity;
    let newest = 0;
    for (let cursor: string | null = ''; cursor !== null;) {
      const { body } = await this.client.get(`${path}?limit=200${cursor === '' ? '' : `&cursor=${cursor}`}`);
      const part = body as Part;
      items.push(...part.items);
      change = Math.min(change, part.change);
      newest = Math.max(newest, part.change);
      cursor = part.next;
    }
    return { items, change, newest };
  }
}
