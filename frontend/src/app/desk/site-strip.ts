import { ChangeDetectionStrategy, Component, computed, effect, inject, signal, untracked } from '@angular/core';
import { type SiteStream, STREAM_ROUTES } from '#shared/contract/stream-routes';
import { secondsBetween } from '#shared/time/instant';
import { ApiClient } from '../api/api-client';
import { InstantPipe } from '../instants/instant-pipe';
import { deviceInstant, serverInstant } from '../instants/server-instant';
import { NetworkStore } from '../networks/network-store';
import { Icon } from '../ui/icon';
import { Loader } from '../ui/loaded';
import { DeskEvents } from './desk-events';
import { ageText, timeText } from './figures';

const LATE_S = 60;

/** The sites at the foot of the desk: how each streams, how far it is, and how well its clock is known. */
@Component({
  selector: 'sw-site-strip',
  imports: [Icon, InstantPipe],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './site-strip.html',
  styleUrl: './site-strip.scss',
})
export class SiteStrip {
  private readonly api = inject(ApiClient);
  private readonly networks = inject(NetworkStore);
  private readonly data = inject(DeskEvents);
  private readonly at = signal(deviceInstant());
  private readonly streams = new Loader(async () => {
    const networkId = this.networks.network()?.id;
    if (networkId === undefined) return undefined;
    const answer = await this.api.call(STREAM_ROUTES.readCompleteness, { params: { networkId } });
    this.at.set(deviceInstant());
    return answer;
  });

  protected readonly sites = computed(() => {
    const streams = new Map((this.streams.value()?.sites ?? []).map((stream) => [stream.siteId, stream]));
    const { columns, briefs } = this.data.events();
    const sigmas = new Map<number, number>();
    for (let row = 0; row < columns.count; row++) sigmas.set(briefs[row]?.siteId ?? 0, columns.sigmaNs[row] ?? 0);
    return this.data.sites().map(({ id, code, name }) => {
      const stream = streams.get(id);
      const behindS = stream?.lastEventAt ? secondsBetween(stream.lastEventAt, this.at()) : undefined;
      const sigmaNs = sigmas.get(id);
      return {
        id,
        code,
        name,
        state: stateOf(stream, behindS),
        last: behindS === undefined ? 'no trigger yet' : `${ageText(behindS)} ago`,
        error: sigmaNs === undefined ? '' : `\u00b1${timeText(sigmaNs)}`,
        delay: delayOf(stream),
        rate: this.rateOf(id),
        completeTo: stream?.completeTo ?? undefined,
        setAsides: stream?.setAsidesLastHour ?? 0,
      };
    });
  });

  constructor() {
    effect(() => {
      if (this.networks.network()) untracked(() => void this.streams.load());
    });
  }

  /** Reads again how far the sites have come. */
  renew(): Promise<void> {
    return this.streams.load();
  }

  /** Triggers a second in the span that is held. */
  private rateOf(siteId: number): string {
    const { columns, briefs } = this.data.events();
    if (columns.count < 2) return '';
    const last = columns.count - 1;
    const spanS = (columns.taiS[last] ?? 0) - (columns.taiS[0] ?? 0) + ((columns.ps[last] ?? 0) - (columns.ps[0] ?? 0)) / 1e12;
    const own = briefs.filter((brief) => brief.siteId === siteId).length;
    return spanS > 5 ? `${(own / spanS).toPrecision(2)}/s` : '';
  }
}

type State = 'streaming' | 'late' | 'silent';

function stateOf(stream: SiteStream | undefined, behindS: number | undefined): State {
  if (!stream || stream.connectedAtMs === null) return 'silent';
  return behindS !== undefined && behindS > LATE_S ? 'late' : 'streaming';
}

/** From the last trigger to its arrival, by the server's clock. */
function delayOf(stream: SiteStream | undefined): string {
  if (!stream?.lastEventAt || stream.lastReceivedAtMs === null) return '';
  const delayS = secondsBetween(stream.lastEventAt, serverInstant(new Date(stream.lastReceivedAtMs).toISOString()));
  return delayS >= 0 ? ageText(delayS) : '';
}
