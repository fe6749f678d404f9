import { ChangeDetectionStrategy, Component, inject, linkedSignal } from '@angular/core';
import type * as z from 'zod';
import { KEPT_MAIL_ROUTES, type keptMail } from '#shared/contract/record-routes';
import { ApiClient } from '../api/api-client';
import { InstantMark } from '../instants/instant';
import { LongList } from '../ui/long-list';
import { Empty, Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { withLinks } from './with-links';

type KeptMail = z.infer<typeof keptMail>;

/** The mails that this server would have sent: it is a demo and keeps them. */
@Component({
  selector: 'sw-mails',
  imports: [Empty, Fault, InstantMark, Skeleton],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './mails.html',
  styleUrl: './mails.scss',
})
export class Mails {
  private readonly api = inject(ApiClient);
  private readonly toasts = inject(ToastStore);
  protected readonly withLinks = withLinks;
  protected readonly mails = new LongList<KeptMail>(
    (cursor) => this.api.call(KEPT_MAIL_ROUTES.listKeptMails, { query: { cursor } }),
    (text) => this.toasts.fail(text),
  );
  /** The mail that is read: at first the newest. */
  protected readonly open = linkedSignal<KeptMail | undefined, KeptMail | undefined>({
    source: () => this.mails.page.value()?.items[0],
    computation: (newest, before) => before?.value ?? newest,
  });

  constructor() {
    void this.mails.page.load();
  }
}
