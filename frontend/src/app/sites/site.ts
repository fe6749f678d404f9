import { ChangeDetectionStrategy, Component, effect, inject, input, signal, untracked } from '@angular/core';
import { type Warning } from '#shared/contract/setup-leaves';
import { type Site, SITE_ROUTES, type SiteVersion } from '#shared/contract/site-routes';
import { ApiClient } from '../api/api-client';
import { InstantMark } from '../instants/instant';
import { NetworkStore } from '../networks/network-store';
import { Preferences } from '../preferences/preferences';
import { SessionStore } from '../session/session-store';
import { PageTitle } from '../shell/page-title';
import { Term } from '../terms/term';
import { FigurePipe } from '../ui/figure';
import { Loader } from '../ui/loaded';
import { Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { Told } from '../ui/told';
import { placeText } from './place-text';
import { SiteClock } from './site-clock';
import { SiteKeys } from './site-keys';
import { SiteStateForm, type SiteTold } from './state-form';
import { fromWords } from './state-words';

/** One site: what its readings are reconciled by, its clock record, and the keys by which it sends. */
@Component({
  selector: 'sw-site',
  imports: [Fault, FigurePipe, InstantMark, SiteClock, SiteKeys, SiteStateForm, Skeleton, Term, Told],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './site.html',
  styleUrl: './site.scss',
})
export class SitePage {
  private readonly api = inject(ApiClient);
  private readonly title = inject(PageTitle);
  private readonly toasts = inject(ToastStore);
  private readonly preferences = inject(Preferences);
  private readonly networks = inject(NetworkStore);
  protected readonly session = inject(SessionStore);

  /** From the address. */
  readonly siteId = input.required<string>();
  protected readonly site = new Loader<Site>(() => this.api.call(SITE_ROUTES.readSite, { params: { siteId: Number(this.siteId()) } }));
  protected readonly place = placeText;
  protected readonly stating = signal(false);
  /** What is doubtful about the state that was just given. */
  protected readonly warnings = signal<readonly Warning[]>([]);

  constructor() {
    effect(() => {
      this.siteId();
      untracked(() => void this.site.load());
    });
    effect(() => {
      const site = this.site.value();
      if (site) this.title.set(site.code);
    });
  }

  protected words(state: SiteVersion): string {
    return fromWords(state, this.preferences.scale());
  }

  /** States in force that do not hold at present. */
  protected later({ versions, now }: Site): readonly SiteVersion[] {
    return versions.filter(({ id, supersededAt }) => supersededAt === null && id !== now?.id);
  }

  protected stated({ site, warnings }: SiteTold): void {
    this.stating.set(false);
    this.site.update(() => site);
    this.warnings.set(warnings);
    this.toasts.say(`${site.code} stated anew.`);
    void this.networks.sites.load();
  }
}
