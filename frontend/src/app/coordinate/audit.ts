import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { RouterLink } from '@angular/router';
import { type AuditEntry, AUDIT_ROUTES } from '#shared/contract/record-routes';
import { ApiClient } from '../api/api-client';
import { InstantMark } from '../instants/instant';
import { NetworkStore } from '../networks/network-store';
import { Preferences } from '../preferences/preferences';
import { SessionStore } from '../session/session-store';
import { LongList } from '../ui/long-list';
import { Empty, Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { actWords, type AuditKnown, detailWords, subjectWords } from './audit-words';

/** Who did what, newest first: the whole deployment's for its coordinator, else the chosen network's. */
@Component({
  selector: 'sw-audit',
  imports: [Empty, Fault, InstantMark, RouterLink, Skeleton],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './audit.html',
})
export class Audit {
  private readonly api = inject(ApiClient);
  private readonly session = inject(SessionStore);
  private readonly networks = inject(NetworkStore);
  private readonly preferences = inject(Preferences);
  private readonly toasts = inject(ToastStore);
  protected readonly act = actWords;
  private readonly known = computed<AuditKnown>(() => ({
    sites: this.networks.sites.value() ?? [],
    networks: this.networks.networks.value() ?? [],
    scale: this.preferences.scale(),
  }));
  protected readonly subject = (entry: AuditEntry): string => subjectWords(entry, this.known());
  protected readonly details = (entry: AuditEntry): string => detailWords(entry, this.known());
  protected readonly trail = new LongList<AuditEntry>(
    (cursor) => {
      const networkId = this.session.coordinatesAll() ? undefined : this.networks.network()?.id;
      return this.api.call(AUDIT_ROUTES.readAudit, { query: { cursor, ...(networkId !== undefined && { networkId }) } });
    },
    (text) => this.toasts.fail(text),
  );

  constructor() {
    void this.trail.page.load();
  }
}
