import { ChangeDetectionStrategy, Component, computed, effect, inject, input, signal, untracked } from '@angular/core';
import { Router } from '@angular/router';
import { SET_ASIDE_REASONS, SET_ASIDE_ROUTES, SET_ASIDE_STATES, type SetAside } from '#shared/contract/set-aside-routes';
import { ApiClient } from '../api/api-client';
import { sentenceOf } from '../api/api-problem';
import { InstantMark } from '../instants/instant';
import { NetworkStore } from '../networks/network-store';
import { Term } from '../terms/term';
import { Loader } from '../ui/loaded';
import { Empty, Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { REASON_WORDS } from './reason-words';
import { SetAsideDetail } from './set-aside-detail';

interface Page {
  readonly items: readonly SetAside[];
  readonly next: string | null;
}

/** The records that could not be accepted, by reason and site, and what becomes of each. All that is chosen stands in the address. */
@Component({
  selector: 'sw-set-asides',
  imports: [Empty, Fault, InstantMark, SetAsideDetail, Skeleton, Term],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './set-asides.html',
  styleUrl: './set-asides.scss',
})
export class SetAsides {
  private readonly api = inject(ApiClient);
  private readonly router = inject(Router);
  private readonly toasts = inject(ToastStore);
  protected readonly networks = inject(NetworkStore);

  /** From the address: which state, reason and site, and which record is open. */
  readonly state = input<string | undefined>();
  readonly reason = input<string | undefined>();
  readonly site = input<string | undefined>();
  readonly open = input<string | undefined>();

  protected readonly words = REASON_WORDS;
  protected readonly reasons = SET_ASIDE_REASONS.map((value) => ({ value, word: REASON_WORDS[value] }));
  protected readonly shownState = computed(() => [...SET_ASIDE_STATES, 'all' as const].find((one) => one === this.state()) ?? 'open');
  private readonly shownReason = computed(() => SET_ASIDE_REASONS.find((one) => one === this.reason()));
  private readonly siteId = computed(() => this.networks.sites.value()?.find(({ code }) => code === this.site())?.id);
  protected readonly openId = computed(() => Number(this.open() ?? 0));
  protected readonly adding = signal(false);
  protected readonly list = new Loader<Page>(() => this.ask(undefined));

  constructor() {
    effect(() => {
      const isReady = this.networks.network() !== undefined && (this.site() === undefined || this.networks.sites.value() !== undefined);
      [this.shownState(), this.shownReason(), this.siteId()].join();
      if (isReady) untracked(() => void this.list.load());
    });
  }

  private ask(cursor: string | undefined): Promise<Page> {
    const networkId = this.networks.network()?.id;
    if (networkId === undefined) return Promise.resolve({ items: [], next: null });
    const [reason, siteId] = [this.shownReason(), this.siteId()];
    const query = {
      state: this.shownState(),
      order: 'down' as const,
      limit: 50,
      ...(reason && { reason }),
      ...(siteId !== undefined && { siteIds: [siteId] }),
      ...(cursor !== undefined && { cursor }),
    };
    return this.api.call(SET_ASIDE_ROUTES.listSetAsides, { params: { networkId }, query });
  }

  /** Shows another part of the list: what is empty falls out of the address. */
  protected choose(part: Readonly<Record<string, string>>): Promise<boolean> {
    const chosen = Object.entries({ open: '', ...part }).map(([name, value]) => [name, value === '' ? null : value] as const);
    const queryParams: Record<string, string | null> = Object.fromEntries(chosen);
    return this.router.navigate([], { queryParams, queryParamsHandling: 'merge' });
  }

  protected async more(): Promise<void> {
    const next = this.list.value()?.next;
    if (next == null || this.adding()) return;
    this.adding.set(true);
    try {
      const page = await this.ask(next);
      this.list.update((before) => ({ items: [...before.items, ...page.items], next: page.next }));
    } catch (fault) {
      this.toasts.fail(sentenceOf(fault));
    }
    this.adding.set(false);
  }

  /** A record that was decided leaves the list of the open ones; a conflict takes its other contents with it. */
  protected async decided(): Promise<void> {
    await this.choose({});
    await this.list.load();
  }

  protected readonly when = (ms: number): string => new Date(ms).toISOString();
}
