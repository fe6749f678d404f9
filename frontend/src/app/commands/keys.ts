import { inject, Injectable, signal } from '@angular/core';
import { Preferences } from '../preferences/preferences';
import { type Command, CommandStore } from './command-store';

/** How long the second key of two may take. */
const SECOND_KEY_MS = 1500;
const TYPED_INTO = 'input, textarea, select, [contenteditable], [role=dialog], [role=slider]';

/** Turns keys into commands: single ones where nothing is being typed and they were not switched off; Ctrl-K always. */
@Injectable({ providedIn: 'root' })
export class Keys {
  private readonly commands = inject(CommandStore);
  private readonly preferences = inject(Preferences);
  private readonly first = signal('');
  private timer: ReturnType<typeof setTimeout> | undefined;

  /** @returns the command that the key completes, if it does */
  pressed(event: KeyboardEvent): Command | undefined {
    if (event.altKey || event.ctrlKey || event.metaKey || event.repeat || event.isComposing) return undefined;
    if (this.preferences.shortcuts() === 'off' || !isFree(event.target) || event.key.length !== 1) return undefined;
    const keys = this.first() === '' ? event.key : `${this.first()} ${event.key}`;
    const all = this.commands.all();
    const found = all.find(({ key }) => key === keys);
    this.hold(!found && all.some(({ key }) => key?.startsWith(`${keys} `)) ? keys : '');
    return found;
  }

  private hold(key: string): void {
    clearTimeout(this.timer);
    this.first.set(key);
    if (key !== '') this.timer = setTimeout(() => this.first.set(''), SECOND_KEY_MS);
  }
}

const isFree = (target: EventTarget | null): boolean => !(target instanceof Element) || target.closest(TYPED_INTO) === null;
