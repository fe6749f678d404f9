import { DialogRef } from '@angular/cdk/dialog';
import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { Preferences } from '../preferences/preferences';
import { Icon } from '../ui/icon';
import { CommandStore } from './command-store';

/** Every key and what it does here, and the switch that turns single keys off. */
@Component({
  selector: 'sw-shortcut-list',
  imports: [Icon],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <div class="dialog wide">
      <header>
        <h2 id="shortcuts-heading">Shortcuts</h2>
        <button class="quiet" type="button" aria-label="Close" (click)="ref.close()"><sw-icon name="close" /></button>
      </header>
      <label class="check">
        <input type="checkbox" [checked]="preferences.shortcuts() === 'on'" #box (change)="set(box.checked)" />
        Single keys act
      </label>
      <dl>
        <div>
          <dt>Find a page, site or command</dt>
          <dd><kbd>Ctrl K</kbd></dd>
        </div>
        @for (command of withKey(); track command.key) {
          <div>
            <dt>{{ command.section === 'Go to' ? 'Go to ' + command.title : command.title }}</dt>
            <dd>
              <kbd>{{ command.key }}</kbd>
            </dd>
          </div>
        }
      </dl>
    </div>
  `,
  styles: `
    header {
      display: flex;
      align-items: center;
      justify-content: space-between;
    }
    dl {
      columns: 2;
      column-gap: 32px;
      margin: 4px 0 0;
    }
    dl div {
      display: flex;
      gap: 12px;
      align-items: center;
      justify-content: space-between;
      min-height: 34px;
      border-bottom: 1px solid var(--rule);
      break-inside: avoid;
    }
    @media (max-width: 700px) {
      dl {
        columns: 1;
      }
    }
  `,
})
export class ShortcutList {
  protected readonly ref = inject(DialogRef);
  protected readonly preferences = inject(Preferences);
  private readonly commands = inject(CommandStore);
  protected readonly withKey = computed(() => this.commands.all().filter(({ key }) => key !== undefined));

  protected set(on: boolean): void {
    this.preferences.shortcuts.set(on ? 'on' : 'off');
  }
}
