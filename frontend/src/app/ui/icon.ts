import { ChangeDetectionStrategy, Component, computed, input } from '@angular/core';
import { type IconName, ICONS } from './icons/icons';

/** An icon in the colour of its text; the words beside it say what it means. */
@Component({
  selector: 'sw-icon',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `<svg viewBox="0 -960 960 960" aria-hidden="true"><path [attr.d]="outline()" /></svg>`,
  styles: `
    :host {
      display: block;
      flex: none;
      width: 20px;
      height: 20px;
    }
    svg {
      display: block;
      width: 100%;
      height: 100%;
      fill: currentColor;
    }
  `,
})
export class Icon {
  readonly name = input.required<IconName>();
  protected readonly outline = computed(() => ICONS[this.name()]);
}
