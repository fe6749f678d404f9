import { signal } from '@angular/core';
import { Loader } from './loaded';
import { sentenceOf } from '../api/api-problem';

interface Page<Item> {
  readonly items: readonly Item[];
  readonly next: string | null;
}

/** A list that is shown from its newest on, and further back when someone asks for more. */
export class LongList<Item> {
  private readonly busy = signal(false);
  readonly adding = this.busy.asReadonly();
  readonly page: Loader<Page<Item>>;

  constructor(
    private readonly ask: (cursor: number | undefined) => Promise<Page<Item>>,
    private readonly onFault: (text: string) => void,
  ) {
    this.page = new Loader(() => this.ask(undefined));
  }

  async more(): Promise<void> {
    const next = this.page.value()?.next;
    if (next == null || this.busy()) return;
    this.busy.set(true);
    try {
      const { items, next: after } = await this.ask(Number(next));
      this.page.update((before) => ({ items: [...before.items, ...items], next: after }));
    } catch (fault) {
      this.onFault(sentenceOf(fault));
    }
    this.busy.set(false);
  }
}
