import { filter, firstValueFrom, Observable, type Subscriber } from 'rxjs';
import { type NetworkChanges } from '#shared/contract/live-changes';

/** A list as it was read, and then each change of it; or why it could not be read, after which it may come yet. */
export type Joined<T> =
  | { readonly kind: 'whole'; readonly value: T }
  | { readonly kind: 'changes'; readonly changes: NetworkChanges }
  | { readonly kind: 'failed'; readonly fault: unknown };

/** What is joined to a list. */
export interface JoinGround {
  readonly changes: Observable<NetworkChanges>;
  /** What was told can no longer be gone on from. */
  readonly anew: Observable<void>;
  /** Whether it is known if there is a link: until then nothing is read, so that it is read once. */
  readonly isSettled: Observable<boolean>;
}

/** Whether a message left rows out that a list must have. */
const isCut = ({ events, coincidences }: NetworkChanges): boolean => events.isCut || coincidences.isCut;

/**
 * A list and what follows it, without a gap and without a double: it listens before it reads, and puts over what was read the changes behind
 * its number alone. It reads again where the changes do not go on from it.
 *
 * @param ground the changes of a network
 * @param load reads the list with the number of the network's last change; of several pages the least
 */
export function joined<T extends { readonly change: number }>(ground: JoinGround, load: () => Promise<T>): Observable<Joined<T>> {
  return new Observable((subscriber) => {
    const join = new Join(ground, load, subscriber);
    subscriber.add(ground.changes.subscribe((changes) => join.changed(changes)));
    subscriber.add(ground.anew.subscribe(() => void join.read()));
    subscriber.add(() => join.end());
    void join.read();
  });
}

class Join<T extends { readonly change: number }> {
  /** The number up to which everything was told; undefined before something was read. */
  private had: number | undefined;
  /** What came while the list is read; undefined while it is not. */
  private waiting: NetworkChanges[] | undefined;
  private turn = 0;

  constructor(
    private readonly ground: JoinGround,
    private readonly load: () => Promise<T>,
    private readonly subscriber: Subscriber<Joined<T>>,
  ) {}

  changed(changes: NetworkChanges): void {
    if (this.waiting) this.waiting.push(changes);
    else this.put(changes);
  }

  end(): void {
    this.turn++;
  }

  async read(): Promise<void> {
    const turn = ++this.turn;
    this.waiting = [];
    const came = await this.whole();
    if (turn !== this.turn) return;
    const { waiting } = this;
    this.waiting = undefined;
    if (came.kind === 'whole') this.had = came.value.change;
    this.subscriber.next(came);
    if (came.kind === 'whole') for (const changes of waiting) this.changed(changes);
  }

  private async whole(): Promise<Joined<T>> {
    try {
      await firstValueFrom(this.ground.isSettled.pipe(filter((is) => is)));
      return { kind: 'whole', value: await this.load() };
    } catch (fault) {
      return { kind: 'failed', fault };
    }
  }

  private put(changes: NetworkChanges): void {
    if (this.had === undefined || changes.to <= this.had) return;
    const joins = changes.from <= this.had + 1 && !isCut(changes);
    if (changes.from <= this.had + 1) {
      this.had = changes.to;
      this.subscriber.next({ kind: 'changes', changes });
    }
    if (!joins) void this.read();
  }
}
