import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { toSignal } from '@angular/core/rxjs-interop';
import { interval, map } from 'rxjs';
import { type SiteStateNow } from '#shared/contract/site-state';
import { secondsBetween } from '#shared/time/instant';
import { ConnectionStore } from '../connection/connection-store';
import { InstantPipe } from '../instants/instant-pipe';
import { deviceInstant } from '../instants/server-instant';
import { LiveStore } from '../live/live-store';
import { Icon } from '../ui/icon';
import { DeskEvents } from './desk-events';
import { ageText, timeText } from './figures';

const LATE_S = 60;
const S_PER_MINUTE = 60;
const TICK_MS = 1_000;

/**
 * The sites at the foot of the desk: how each streams, how far it is, and how well its clock is known. While the server is away nothing is
 * said of what a site does now; what it did last grows old.
 */
@Component({
  selector: 'sw-site-strip',
  imports: [Icon, InstantPipe],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './site-strip.html',
  styleUrl: './site-strip.scss',
  host: { role: 'region', 'aria-label': 'How the sites stream', tabindex: '0' }, // wider than a narrow window, it scrolls by the arrows
})
export class SiteStrip {
  private readonly live = inject(LiveStore);
  private readonly connection = inject(ConnectionStore);
  private readonly data = inject(DeskEvents);
  private readonly now = toSignal(interval(TICK_MS).pipe(map(deviceInstant)), { initialValue: deviceInstant() });
  private readonly isTold = computed(
    () => !this.connection.offline() && (this.live.phase() === 'live' || this.live.phase() === 'catching-up'),
  );

  protected readonly isLost = computed(() => this.connection.offline() || this.live.phase() === 'offline');
  protected readonly since = this.connection.offlineSince;
  protected readonly sites = computed(() => {
    const states = new Map(this.live.sites().map((state) => [state.siteId, state]));
    const [now, isTold] = [this.now(), this.isTold()];
    return this.data.sites().map(({ id, code, name }) => {
      const state = states.get(id);
      const ageS = state?.lastEventAt ? secondsBetween(state.lastEventAt, now) : undefined;
      return {
        id,
        code,
        name,
        state: isTold ? streamOf(state, ageS) : 'unknown',
        last: ageS === undefined ? (isTold ? 'no trigger yet' : '') : `${ageText(ageS)} ago`,
        error: state?.lastSigmaNs == null ? '' : `\u00b1${timeText(state.lastSigmaNs)}`,
        delay: !isTold || state?.delayMs == null ? '' : `delay ${ageText(state.delayMs / 1e3)}`,
        rate: isTold && state ? `${(state.eventsLastMinute / S_PER_MINUTE).toPrecision(2)}/s` : '',
        completeTo: state?.completeTo ?? undefined,
        setAsides: state?.setAsidesLastHour ?? 0,
      };
    });
  });
}

function streamOf(state: SiteStateNow | undefined, ageS: number | undefined): 'streaming' | 'late' | 'silent' {
  if (state?.connectedAtMs == null) return 'silent';
  return ageS !== undefined && ageS > LATE_S ? 'late' : 'streaming';
}
