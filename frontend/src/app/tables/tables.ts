import { ChangeDetectionStrategy, Component, inject, signal } from '@angular/core';
import { TABLE_ROUTES } from '#shared/contract/table-routes';
import { ApiClient } from '../api/api-client';
import { sentenceOf } from '../api/api-problem';
import { InstantMark } from '../instants/instant';
import { Loader } from '../ui/loaded';
import { SessionStore } from '../session/session-store';
import { Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { mjdText } from './mjd-text';
import { TableStore } from './table-store';

/** The tables that were loaded, and which are in force. */
@Component({
  selector: 'sw-tables',
  imports: [Fault, InstantMark, Skeleton],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './tables.html',
  styleUrl: './tables.scss',
})
export class Tables {
  private readonly api = inject(ApiClient);
  private readonly toasts = inject(ToastStore);
  private readonly store = inject(TableStore);
  protected readonly session = inject(SessionStore);
  protected readonly day = mjdText;
  protected readonly busy = signal(false);
  protected readonly leapSeconds = new Loader(async () => (await this.api.call(TABLE_ROUTES.listLeapSecondTables, {})).items);
  protected readonly orientation = new Loader(async () => (await this.api.call(TABLE_ROUTES.listOrientationTables, {})).items);

  constructor() {
    void this.leapSeconds.load();
    void this.orientation.load();
  }

  protected uploadLeapSeconds(event: Event): Promise<void> {
    return this.upload(event, async (text) => {
      await this.api.call(TABLE_ROUTES.uploadLeapSecondTable, { body: { text } });
      await this.leapSeconds.load();
    });
  }

  protected uploadOrientation(event: Event): Promise<void> {
    return this.upload(event, async (text) => {
      await this.api.call(TABLE_ROUTES.uploadOrientationTable, { body: { text } });
      await this.orientation.load();
    });
  }

  /** Puts another table in force; the one before can be put back for a while. */
  protected put(kind: 'leapSeconds' | 'orientation', id: number, undoable = true): Promise<void> {
    const before = this[kind].value()?.find(({ isInForce }) => isInForce)?.id;
    const route = kind === 'leapSeconds' ? TABLE_ROUTES.putLeapSecondTableInForce : TABLE_ROUTES.putOrientationTableInForce;
    return this.do(async () => {
      await this.api.call<typeof route.params, typeof route.query, typeof route.body, typeof route.answer>(route, {
        params: { tableId: id },
      });
      await Promise.all([this[kind].load(), this.store.inForce.load()]);
      this.toasts.say('The table is in force.', undoable && before !== undefined ? () => this.put(kind, before, false) : undefined);
    });
  }

  private async upload(event: Event, send: (text: string) => Promise<void>): Promise<void> {
    const box = event.target;
    const file = box instanceof HTMLInputElement ? box.files?.[0] : undefined;
    if (!(box instanceof HTMLInputElement) || !file) return;
    this.busy.set(true);
    await this.do(async () => {
      await send(await file.text());
      this.toasts.say(`${file.name} checked and kept. It counts once it is put in force.`);
    });
    box.value = '';
    this.busy.set(false);
  }

  private async do(act: () => Promise<void>): Promise<void> {
    try {
      await act();
    } catch (fault) {
      this.toasts.fail(sentenceOf(fault));
    }
  }
}
