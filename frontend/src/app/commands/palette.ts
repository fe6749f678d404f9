import { DialogRef } from '@angular/cdk/dialog';
import { ChangeDetectionStrategy, Component, computed, inject, linkedSignal, signal } from '@angular/core';
import { Icon } from '../ui/icon';
import { type Command, CommandStore, findCommands } from './command-store';

/** Every command by its words, and beside it its key; sites by their codes and names. */
@Component({
  selector: 'sw-palette',
  imports: [Icon],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './palette.html',
  styleUrl: './palette.scss',
})
export class Palette {
  private readonly commands = inject(CommandStore);
  private readonly ref = inject(DialogRef);
  protected readonly typed = signal('');
  protected readonly found = computed(() => findCommands(this.commands.all(), this.typed()));
  protected readonly at = linkedSignal({ source: this.found, computation: () => 0 });

  protected move(event: Event, by: number): void {
    event.preventDefault();
    const count = this.found().length;
    if (count > 0) this.at.update((at) => (at + by + count) % count);
  }

  protected choose(command: Command | undefined): void {
    if (!command) return;
    this.ref.close();
    command.run();
  }
}
