import { ChangeDetectionStrategy, Component, effect, inject, input, signal, untracked } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { keyLabel, type SiteKey } from '#shared/contract/people';
import { SITE_KEY_ROUTES } from '#shared/contract/people-routes';
import { ApiClient } from '../api/api-client';
import { sentenceOf } from '../api/api-problem';
import { InstantMark } from '../instants/instant';
import { ConfirmTyped } from '../ui/confirm-typed';
import { Field } from '../ui/field';
import { Icon } from '../ui/icon';
import { Loader } from '../ui/loaded';
import { Sending } from '../ui/sending';
import { Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { zodValidator } from '../ui/zod-validator';

/** The keys of a site. A whole key is shown once, when it is made, and kept nowhere. */
@Component({
  selector: 'sw-site-keys',
  imports: [Fault, Field, Icon, InstantMark, ReactiveFormsModule, Skeleton],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './site-keys.html',
  styleUrl: './site-keys.scss',
})
export class SiteKeys {
  private readonly api = inject(ApiClient);
  private readonly confirm = inject(ConfirmTyped);
  private readonly toasts = inject(ToastStore);
  readonly siteId = input.required<number>();

  protected readonly keys = new Loader<readonly SiteKey[]>(
    async () => (await this.api.call(SITE_KEY_ROUTES.listSiteKeys, { params: { siteId: this.siteId() } })).items,
  );
  protected readonly form = new FormGroup({
    label: new FormControl('', { nonNullable: true, validators: zodValidator(keyLabel()) }),
  });
  protected readonly sending = new Sending(this.form);
  /** The whole key that was just made, until it is put away. */
  protected readonly made = signal<string | undefined>(undefined);

  constructor() {
    effect(() => {
      this.siteId();
      untracked(() => void this.keys.load());
    });
  }

  protected make(): Promise<boolean> {
    return this.sending.send(async () => {
      const { key, ...shown } = await this.api.call(SITE_KEY_ROUTES.makeSiteKey, {
        params: { siteId: this.siteId() },
        body: this.form.getRawValue(),
      });
      this.made.set(key);
      this.keys.update((all) => [shown, ...all]);
      this.form.reset();
    });
  }

  protected async copy(key: string): Promise<void> {
    await navigator.clipboard.writeText(key);
    this.toasts.say('Key copied.');
  }

  protected async revoke({ id, label, prefix }: SiteKey): Promise<void> {
    const meant = await this.confirm.ask({
      heading: `Revoke the key ${label}`,
      text: 'Its stream is cut at once and cannot come back by it. This cannot be undone; another key can be made.',
      word: prefix,
      act: 'Revoke the key',
    });
    if (!meant) return;
    try {
      const revoked = await this.api.call(SITE_KEY_ROUTES.revokeSiteKey, { params: { siteId: this.siteId(), keyId: id } });
      this.keys.update((all) => all.map((one) => (one.id === id ? revoked : one)));
      this.toasts.say(`Key ${label} revoked.`);
    } catch (fault) {
      this.toasts.fail(sentenceOf(fault));
    }
  }
}
