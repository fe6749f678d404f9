import { effect, inject, Injectable, untracked } from '@angular/core';
import { TABLE_ROUTES } from '#shared/contract/table-routes';
import { ApiClient } from '../api/api-client';
import { SessionStore } from '../session/session-store';
import { Loader } from '../ui/loaded';

/** The tables of leap seconds and Earth orientation that are in force, and what is doubtful about them now. */
@Injectable({ providedIn: 'root' })
export class TableStore {
  private readonly api = inject(ApiClient);
  readonly inForce = new Loader(() => this.api.call(TABLE_ROUTES.readTablesInForce, {}));

  constructor() {
    const session = inject(SessionStore);
    effect(() => {
      if (session.me()) untracked(() => void this.inForce.load());
    });
  }
}
