import { computed, DestroyRef, inject, Injectable, signal } from '@angular/core';
import { type IconName } from '../ui/icons/icons';

/** Something that can be done from anywhere on a page: by the palette, and by its key where it has one. */
export interface Command {
  /** The act, as a button would say it. */
  readonly title: string;
  /** Under which heading the lists have it. */
  readonly section: 'Go to' | 'This page' | 'Everywhere' | 'Site';
  readonly icon?: IconName;
  /** One key, or two one after the other with a blank between them: `t`, `g d`. */
  readonly key?: string;
  readonly run: () => unknown;
}

/** All that can be done now: what the application always offers, and what the page adds while it is open. */
@Injectable({ providedIn: 'root' })
export class CommandStore {
  private readonly lists = signal<readonly (() => readonly Command[])[]>([]);
  readonly all = computed(() => this.lists().flatMap((list) => list()));

  /** Adds commands for as long as the part that calls lives; to be called where it may inject. `list` may read signals. */
  offer(list: () => readonly Command[]): void {
    this.lists.update((lists) => [...lists, list]);
    inject(DestroyRef).onDestroy(() => this.lists.update((lists) => lists.filter((one) => one !== list)));
  }
}

/**
 * The commands whose words hold everything that was typed, best first: those whose title begins with it, then the others in their order.
 *
 * @param typed words in any case; nothing finds all
 */
export function findCommands(all: readonly Command[], typed: string): readonly Command[] {
  const words = typed.toLowerCase().split(/\s+/).filter((word) => word !== ''); // prettier-ignore
  const found = all.filter(({ title, section }) => words.every((word) => `${section} ${title}`.toLowerCase().includes(word)));
  const first = typed.trim().toLowerCase();
  const begins = ({ title }: Command): boolean => first !== '' && title.toLowerCase().startsWith(first);
  return [...found.filter(begins), ...found.filter((command) => !begins(command))];
}
