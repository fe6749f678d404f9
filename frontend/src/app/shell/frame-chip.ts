import { CdkMenu, CdkMenuItem, CdkMenuItemRadio, CdkMenuTrigger } from '@angular/cdk/menu';
import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { FrameChoice } from '../frames/frame-choice';
import { FrameGlyph } from '../ui/frame-glyph';

/** The frame that the page is in; where the page offers others, a menu of them. */
@Component({
  selector: 'sw-frame-chip',
  imports: [CdkMenu, CdkMenuItem, CdkMenuItemRadio, CdkMenuTrigger, FrameGlyph],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    @if (choice.offered(); as offered) {
      <button type="button" class="chip" [cdkMenuTriggerFor]="menu" title="Choose the frame">
        <sw-frame-glyph [velocityC]="offered.velocityC" /><span class="visually-hidden">Frame: </span>{{ offered.shown }}
      </button>
      <ng-template #menu>
        <div class="menu" cdkMenu aria-label="Frame">
          @for (one of offered.options; track one.code) {
            <button type="button" cdkMenuItemRadio [cdkMenuItemChecked]="one.isShown" (cdkMenuItemTriggered)="one.choose()">
              <sw-frame-glyph [velocityC]="one.velocityC" /><b>{{ one.code }}</b
              ><span>{{ one.words }}</span>
            </button>
          }
          @if (offered.pin; as pin) {
            <button type="button" class="pin" cdkMenuItem (cdkMenuItemTriggered)="pin()">Pin this frame</button>
          }
        </div>
      </ng-template>
    } @else {
      <span class="chip"><sw-frame-glyph /><span class="visually-hidden">Frame: </span>Geocentric</span>
    }
  `,
  styles: `
    :host {
      display: flex;
    }
    .chip {
      display: inline-flex;
      gap: 7px;
      align-items: center;
      height: 30px;
      padding: 0 11px;
      border: 1px solid var(--rule);
      border-radius: var(--radius);
      background: var(--sheet);
      color: inherit;
      font: 560 13px var(--sans);
      white-space: nowrap;
    }
    button.chip {
      cursor: pointer;
    }
    button.chip:hover {
      border-color: var(--ink-3);
    }
    .menu {
      display: grid;
      max-width: min(440px, 94vw);
      max-height: 70vh;
      padding: 4px;
      overflow-y: auto;
      border: 1px solid var(--ink);
      border-radius: var(--radius);
      background: var(--sheet);
      box-shadow: 0 6px 24px var(--shade);
    }
    .menu button {
      display: grid;
      grid-template-columns: 20px auto minmax(0, 1fr);
      gap: 10px;
      align-items: center;
      min-height: 36px;
      padding: 0 12px;
      border: 0;
      border-radius: 2px;
      background: none;
      color: inherit;
      font: 520 13.5px var(--sans);
      text-align: left;
      cursor: pointer;
    }
    .menu button:hover,
    .menu button:focus-visible {
      background: var(--well);
    }
    .menu button[aria-checked='true'] {
      box-shadow: inset 3px 0 0 var(--ink);
    }
    .menu span {
      overflow: hidden;
      color: var(--ink-2);
      font-weight: 430;
      text-overflow: ellipsis;
      white-space: nowrap;
    }
    .menu .pin {
      display: block;
      margin-top: 4px;
      border-top: 1px solid var(--rule);
      font-weight: 620;
    }
  `,
})
export class FrameChip {
  protected readonly choice = inject(FrameChoice);
}
