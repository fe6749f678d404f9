import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { CdkMenuTrigger } from '@angular/cdk/menu';
import { Icon } from '../ui/icon';
import { DeskEvents } from './desk-events';
import { DeskPlace } from './desk-place';
import { allColumns, columnsText, movedColumn, shownColumns } from './set-columns';

/** Which columns the table of coincidences has, and in which order. */
@Component({
  selector: 'sw-column-choice',
  imports: [CdkMenuTrigger, Icon],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <button type="button" class="btn" [cdkMenuTriggerFor]="choice"><sw-icon name="view-column" /><span class="long">Columns</span></button>
    <ng-template #choice>
      <div class="choice" role="group" aria-label="Columns">
        @for (column of shown(); track column.name) {
          <div>
            <label class="check"
              ><input type="checkbox" checked (change)="take(column.name)" />{{ column.frame ? 'in ' + column.head : column.head }}</label
            >
            <button
              type="button"
              class="quiet"
              [attr.aria-label]="'Move ' + column.head + ' to the left'"
              [disabled]="$first"
              (click)="move(column.name, -1)"
            >
              ↑
            </button>
            <button
              type="button"
              class="quiet"
              [attr.aria-label]="'Move ' + column.head + ' to the right'"
              [disabled]="$last"
              (click)="move(column.name, 1)"
            >
              ↓
            </button>
          </div>
        }
        @for (column of others(); track column.name) {
          <div>
            <label class="check"
              ><input type="checkbox" (change)="add(column.name)" />{{ column.frame ? 'in ' + column.head : column.head }}</label
            >
          </div>
        }
        <button type="button" class="link" (click)="place.go({ columns: undefined })">As usual</button>
      </div>
    </ng-template>
  `,
  styles: `
    .btn {
      min-height: 32px;
      padding: 0 11px;
      font-size: 13px;
    }
    .choice {
      min-width: 260px;
      padding: 8px 12px 10px;
      border: 1px solid var(--ink);
      border-radius: var(--radius);
      background: var(--sheet);
      box-shadow: 0 6px 24px var(--shade);
      font-size: 13.5px;
    }
    .choice > div {
      display: flex;
      align-items: center;
      min-height: 34px;
    }
    .check {
      flex: 1;
    }
    .quiet {
      width: 30px;
      height: 30px;
    }
    .quiet:disabled {
      opacity: 0.3;
    }
    @media (max-width: 1500px) {
      .long {
        position: absolute;
        width: 1px;
        height: 1px;
        overflow: hidden;
        clip-path: inset(50%);
      }
      .btn sw-icon {
        margin: 0;
      }
    }
  `,
})
export class ColumnChoice {
  private readonly data = inject(DeskEvents);
  protected readonly place = inject(DeskPlace);
  private readonly frames = computed(() => this.data.pinned().map(({ code }) => code));
  protected readonly shown = computed(() => shownColumns(this.place.address().columns, this.frames()));
  protected readonly others = computed(() => {
    const names = new Set(this.shown().map(({ name }) => name));
    return allColumns(this.frames()).filter(({ name }) => !names.has(name));
  });

  protected move(name: string, by: number): void {
    this.place.go({ columns: columnsText(movedColumn(this.shown(), name, by)) });
  }

  protected take(name: string): void {
    const left = this.shown().filter((column) => column.name !== name);
    if (left.length > 0) this.place.go({ columns: columnsText(left) });
  }

  protected add(name: string): void {
    const column = this.others().find((one) => one.name === name);
    if (column) this.place.go({ columns: columnsText([...this.shown(), column]) });
  }
}
