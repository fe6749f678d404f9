import { ChangeDetectionStrategy, Component, effect, inject, input, untracked } from '@angular/core';
import { type Site, SITE_ROUTES } from '#shared/contract/site-routes';
import { ApiClient } from '../api/api-client';
import { InstantMark } from '../instants/instant';
import { SessionStore } from '../session/session-store';
import { PageTitle } from '../shell/page-title';
import { Loader } from '../ui/loaded';
import { Fault, Skeleton } from '../ui/states';
import { placeText } from './place-text';
import { SiteClock } from './site-clock';
import { SiteKeys } from './site-keys';

/** One site: what its readings are reconciled by, its clock record, and the keys by which it sends. */
@Component({
  selector: 'sw-site',
  imports: [Fault, InstantMark, SiteClock, SiteKeys, Skeleton],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './site.html',
  styleUrl: './site.scss',
})
export class SitePage {
  private readonly api = inject(ApiClient);
  private readonly title = inject(PageTitle);
  protected readonly session = inject(SessionStore);

  /** From the address. */
  readonly siteId = input.required<string>();
  protected readonly site = new Loader<Site>(() => this.api.call(SITE_ROUTES.readSite, { params: { siteId: Number(this.siteId()) } }));
  protected readonly place = placeText;

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
}
