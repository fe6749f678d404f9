import { ChangeDetectionStrategy, Component, input } from '@angular/core';

/** The mark of a pair's class: told by shape, fill and line before it is told by hue. The word for it stands beside it. */
@Component({
  selector: 'sw-interval-mark',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <svg viewBox="-12 -12 24 24" aria-hidden="true">
      @switch (of()) {
        @case ('timelike') {
          <path class="timelike" d="M0 -10L6 0L0 10L-6 0Z" />
        }
        @case ('spacelike') {
          <path class="spacelike" d="M-10 0L0 -6L10 0L0 6Z" />
        }
        @case ('undecided') {
          <circle class="undecided" r="7.5" />
        }
      }
    </svg>
  `,
  styles: `
    :host {
      display: block;
      flex: none;
      width: 24px;
      height: 24px;
    }
    svg {
      display: block;
    }
    .timelike {
      fill: var(--timelike);
    }
    .spacelike {
      fill: var(--sheet);
      stroke: var(--spacelike);
      stroke-width: 1.8;
    }
    .undecided {
      fill: var(--sheet);
      stroke: var(--undecided);
      stroke-width: 1.8;
      stroke-dasharray: 2.1 1.9;
    }
  `,
})
export class IntervalMark {
  readonly of = input.required<'timelike' | 'spacelike' | 'undecided'>();
}
