import { ChangeDetectionStrategy, Component, computed, effect, inject, signal, untracked } from '@angular/core';
import { Router, RouterLink } from '@angular/router';
import { PEOPLE_ROUTES, SITE_KEY_ROUTES } from '#shared/contract/people-routes';
import { type Site } from '#shared/contract/site-routes';
import { ApiClient } from '../api/api-client';
import { MakeNetwork } from '../networks/make-network';
import { NetworkStore } from '../networks/network-store';
import { RegisterSite } from '../sites/register-site';
import { TableStore } from '../tables/table-store';
import { Icon } from '../ui/icon';
import { Loader } from '../ui/loaded';
import { ToastStore } from '../ui/toasts';
import { EmptyDiagram } from './empty-diagram';

interface Step {
  readonly title: string;
  readonly text: string;
  readonly done: boolean;
  /** Where a step that is done is changed, or one that has no form here is taken. */
  readonly path: string;
}

/** What an empty deployment needs until the first pair can be classified, in order, with the form of the next step. */
@Component({
  selector: 'sw-first-steps',
  imports: [EmptyDiagram, Icon, MakeNetwork, RegisterSite, RouterLink],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './first-steps.html',
  styleUrl: './first-steps.scss',
})
export class FirstSteps {
  private readonly api = inject(ApiClient);
  private readonly router = inject(Router);
  private readonly tables = inject(TableStore);
  private readonly toasts = inject(ToastStore);
  protected readonly networks = inject(NetworkStore);
  private readonly people = new Loader(async () => (await this.api.call(PEOPLE_ROUTES.listPeople, {})).items.length);
  private readonly keys = signal(0);

  protected readonly sites = computed(() => this.networks.sites.value() ?? []);
  protected readonly steps = computed<readonly Step[]>(() => {
    const network = this.networks.network();
    const [first, second] = this.sites();
    const list = this.tables.inForce.value()?.leapSeconds;
    const keyPath = first ? `/sites/${first.id}` : '/sites';
    return [
      { title: 'Name the network', text: network?.name ?? 'code and origin of its frames', done: network !== undefined, path: '/network' },
      {
        title: 'Load the leap-second list',
        text: list ? 'loaded' : 'the one that came with the program serves',
        done: true,
        path: '/tables',
      },
      {
        title: 'Register the first site',
        text: first ? `${first.code} ${first.name}` : 'place, scale, cable delay, clock',
        done: first !== undefined,
        path: keyPath,
      },
      { title: 'Make a key for it', text: 'then it streams its log', done: this.keys() > 0, path: keyPath },
      {
        title: 'Register a second site',
        text: second ? `${second.code} ${second.name}` : 'pairs need two',
        done: second !== undefined,
        path: '/sites',
      },
      { title: 'Invite people', text: 'operators, analysts, reviewers', done: (this.people.value() ?? 1) > 1, path: '/people' },
    ];
  });
  protected readonly nextIndex = computed(() => this.steps().findIndex(({ done }) => !done));
  protected readonly done = computed(() => this.steps().filter(({ done }) => done).length);
  protected readonly heading = computed(() => {
    if (!this.networks.network()) return 'No network yet';
    const count = this.sites().length;
    return count === 0 ? 'No sites yet' : count === 1 ? 'One site' : `${count} sites`;
  });

  constructor() {
    void this.people.load();
    effect(() => {
      const first = this.sites()[0];
      if (first) untracked(() => void this.countKeys(first.id));
    });
  }

  protected async registered(site: Site): Promise<void> {
    this.toasts.say(`${site.code} registered.`);
    const isFirst = this.sites().length === 0;
    await this.networks.sites.load();
    if (isFirst) await this.router.navigate(['/sites', site.id]);
  }

  protected networkMade(name: string): void {
    this.toasts.say(`Network ${name} made.`);
  }

  private async countKeys(siteId: number): Promise<void> {
    const { items } = await this.api.call(SITE_KEY_ROUTES.listSiteKeys, { params: { siteId } });
    this.keys.set(items.filter(({ revokedAt }) => revokedAt === null).length);
  }
}
