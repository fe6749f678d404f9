import { ChangeDetectionStrategy, Component, inject, signal } from '@angular/core';
import { Router, RouterLink } from '@angular/router';
import { type Site } from '#shared/contract/site-routes';
import { InstantMark } from '../instants/instant';
import { NetworkStore } from '../networks/network-store';
import { SessionStore } from '../session/session-store';
import { Icon } from '../ui/icon';
import { Empty, Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { placeText } from './place-text';
import { RegisterSite } from './register-site';

/** The sites of the network: where they stand, by which clock they keep time, and how far their streams have come. */
@Component({
  selector: 'sw-sites',
  imports: [Empty, Fault, Icon, InstantMark, RegisterSite, RouterLink, Skeleton],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './sites.html',
  styles: `
    sw-register-site {
      display: block;
      max-width: 640px;
      margin-bottom: 24px;
    }
  `,
})
export class Sites {
  private readonly router = inject(Router);
  private readonly toasts = inject(ToastStore);
  protected readonly session = inject(SessionStore);
  protected readonly networks = inject(NetworkStore);
  protected readonly registering = signal(false);
  protected readonly place = placeText;

  protected async registered(site: Site): Promise<void> {
    this.toasts.say(`${site.code} registered.`);
    await this.networks.sites.load();
    await this.router.navigate(['/sites', site.id]);
  }
}
