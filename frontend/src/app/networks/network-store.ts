import { computed, effect, inject, Injectable, signal, untracked } from '@angular/core';
import { type HeldRole } from '#shared/contract/roles';
import { type Network, NETWORK_ROUTES } from '#shared/contract/network-routes';
import { SITE_ROUTES } from '#shared/contract/site-routes';
import { allOf } from '../api/all-of';
import { ApiClient } from '../api/api-client';
import { SessionStore } from '../session/session-store';
import { Loader } from '../ui/loaded';

const CHOSEN = 'skewline-network';

/** The networks of who is signed in, the one that all pages are about, and the sites of it. */
@Injectable({ providedIn: 'root' })
export class NetworkStore {
  private readonly api = inject(ApiClient);
  private readonly session = inject(SessionStore);
  private readonly chosenId = signal(Number(localStorage.getItem(CHOSEN) ?? 0));

  readonly networks = new Loader(() => allOf((query) => this.api.call(NETWORK_ROUTES.listNetworks, { query })));
  /** The network that was chosen last, else the first; undefined where there is none yet, or none is loaded. */
  readonly network = computed<Network | undefined>(() => {
    const all = this.networks.value() ?? [];
    return all.find(({ id }) => id === this.chosenId()) ?? all[0];
  });
  /** All sites of the network, by their codes. */
  readonly sites = new Loader(async () => {
    const networkId = this.network()?.id;
    if (networkId === undefined) return [];
    const params = { networkId };
    const sites = await allOf((query) => this.api.call(SITE_ROUTES.listSites, { params, query }));
    return sites.sort((a, b) => (a.code < b.code ? -1 : 1));
  });

  constructor() {
    const networkId = computed(() => this.network()?.id);
    const personId = computed(() => this.session.me()?.id);
    effect(() => {
      if (personId() !== undefined) untracked(() => void this.networks.load());
    });
    effect(() => {
      networkId();
      if (this.networks.state().kind === 'loaded') untracked(() => void this.sites.load());
    });
  }

  choose(id: number): void {
    localStorage.setItem(CHOSEN, String(id));
    this.chosenId.set(id);
  }

  /** Where a role is held, after its name: 'of the deployment', 'in Cairnway', 'of site ORL in Cairnway'. */
  placeWords({ networkId, siteId }: HeldRole): string {
    if (networkId === null) return 'of the whole deployment';
    const network = this.networks.value()?.find(({ id }) => id === networkId)?.name ?? `network ${networkId}`;
    if (siteId === null) return `in ${network}`;
    const site = this.sites.value()?.find(({ id }) => id === siteId)?.code ?? String(siteId);
    return `of site ${site} in ${network}`;
  }
}
