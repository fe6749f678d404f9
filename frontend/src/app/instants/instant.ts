import { ChangeDetectionStrategy, Component, input } from '@angular/core';
import { type Instant } from '#shared/time/instant';
import { InstantPipe } from './instant-pipe';

/** An instant in the chosen scale: decimals in threes by thin gaps that are not copied, microseconds bold, and always the scale. */
@Component({
  selector: 'sw-instant',
  imports: [InstantPipe],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    @let parts = of() | swInstant: decimals();
    <b>{{ parts.date + ' ' + parts.clock }}</b>
    @for (group of parts.groups; track $index) {
      <span [class.micro]="$index === 1">{{ ($first ? '.' : '') + group }}</span>
    }
    <span class="scale">{{ ' ' + parts.scale }}</span>
  `,
  styles: `
    :host {
      font-family: var(--mono);
      font-size: 0.945em;
      font-weight: 430;
      letter-spacing: -0.01em;
      font-variant-numeric: tabular-nums;
      white-space: nowrap;
    }
    span + span:not(.scale) {
      margin-left: 0.22em;
    }
    .scale {
      color: var(--ink-2);
    }
    b {
      font-weight: inherit;
    }
    .micro {
      font-weight: 640;
    }
  `,
})
export class InstantMark {
  /** An instant, or what the server's clock wrote in UTC. */
  readonly of = input.required<Instant | string>();
  readonly decimals = input(0);
}
