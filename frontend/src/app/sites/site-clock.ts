import { ChangeDetectionStrategy, Component, effect, inject, input, untracked } from '@angular/core';
import { type Clock, CLOCK_ROUTES } from '#shared/contract/clock-routes';
import { ApiClient } from '../api/api-client';
import { InstantMark } from '../instants/instant';
import { Loader } from '../ui/loaded';
import { Fault, Skeleton } from '../ui/states';

/** The clock record by which a site keeps time: every stretch in force. */
@Component({
  selector: 'sw-site-clock',
  imports: [Fault, InstantMark, Skeleton],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    @let state = clock.state();
    <h2>Clock record{{ state.kind === 'loaded' ? ' of ' + state.value.code : '' }}</h2>
    @switch (state.kind) {
      @case ('loading') {
        <sw-skeleton />
      }
      @case ('failed') {
        <sw-fault heading="The clock record could not be loaded." [text]="state.text" [id]="state.id" (again)="clock.load()" />
      }
      @case ('loaded') {
        <div class="wide" tabindex="0" role="region" aria-label="Clock record">
          <table class="table">
            <thead>
              <tr>
                <th>From</th>
                <th class="right">Offset, ns</th>
                <th class="right">its error, ns</th>
                <th class="right">Rate, ns a day</th>
                <th class="right">its error</th>
                <th>Stated</th>
              </tr>
            </thead>
            <tbody>
              @for (segment of state.value.record; track segment.id) {
                <tr>
                  <td><sw-instant [of]="segment.from" /></td>
                  <td class="right figure">{{ segment.offsetNs }}</td>
                  <td class="right figure">{{ segment.offsetSigmaNs }}</td>
                  <td class="right figure">{{ segment.rateNsPerDay }}</td>
                  <td class="right figure">{{ segment.rateSigmaNsPerDay }}</td>
                  <td>{{ segment.origin === 'by-hand' ? 'by hand' : 'by ' + segment.origin }}</td>
                </tr>
              } @empty {
                <tr>
                  <td colspan="6" class="note">No stretch yet: what the site sends waits for one.</td>
                </tr>
              }
            </tbody>
          </table>
        </div>
      }
    }
  `,
})
export class SiteClock {
  private readonly api = inject(ApiClient);
  readonly clockId = input.required<number>();
  protected readonly clock = new Loader<Clock>(() => this.api.call(CLOCK_ROUTES.readClock, { params: { clockId: this.clockId() } }));

  constructor() {
    effect(() => {
      this.clockId();
      untracked(() => void this.clock.load());
    });
  }
}
