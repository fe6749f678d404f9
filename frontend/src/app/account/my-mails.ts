import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { type MailKind, OPTIONAL_MAILS } from '#shared/contract/mail-kinds';
import { PREFERENCE_ROUTES, type Switch } from '#shared/contract/preference-routes';
import { ApiClient } from '../api/api-client';
import { sentenceOf } from '../api/api-problem';
import { Loader } from '../ui/loaded';
import { Segmented } from '../ui/segmented';
import { Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';

/** Which mails someone gets: a switch for each kind that they may do without, saved as it is pressed. */
@Component({
  selector: 'sw-my-mails',
  imports: [Fault, Segmented, Skeleton],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <h2>Mails</h2>
    <p class="note">Invitations, links for a new password, and word that your password was changed always come.</p>
    @let state = wanted.state();
    @switch (state.kind) {
      @case ('loading') {
        <sw-skeleton />
      }
      @case ('failed') {
        <sw-fault heading="What you chose could not be loaded." [text]="state.text" [id]="state.id" (again)="wanted.load()" />
      }
      @case ('loaded') {
        @for (mail of kinds; track mail.kind) {
          <div class="kind">
            <div>
              <p>{{ mail.name }}</p>
              <p class="note">{{ mail.sentence }}</p>
            </div>
            <sw-segmented [label]="mail.name" [options]="onOrOff" [value]="state.value[mail.kind]" (valueChange)="save(mail, $event)" />
          </div>
        }
      }
    }
  `,
  styles: `
    .kind {
      display: grid;
      grid-template-columns: minmax(0, 1fr) 160px;
      gap: 8px 20px;
      align-items: center;
      min-height: 56px;
      padding: 10px 0;
      border-bottom: 1px solid var(--rule-2);
    }
    @media (max-width: 700px) {
      .kind {
        grid-template-columns: minmax(0, 1fr);
      }
    }
  `,
})
export class MyMails {
  private readonly api = inject(ApiClient);
  private readonly toasts = inject(ToastStore);
  protected readonly kinds = OPTIONAL_MAILS;
  protected readonly onOrOff = [
    { value: 'on', word: 'On' },
    { value: 'off', word: 'Off' },
  ] as const;
  protected readonly wanted = new Loader(async () => (await this.api.call(PREFERENCE_ROUTES.readMyPreferences, {})).mails);

  constructor() {
    void this.wanted.load();
  }

  /** The switch stands where it was pressed to; where that was not kept, it goes back. */
  protected async save({ kind, name }: { readonly kind: MailKind; readonly name: string }, value: Switch): Promise<void> {
    const before = this.wanted.value()?.[kind];
    if (before === undefined || before === value) return;
    this.wanted.update((mails) => ({ ...mails, [kind]: value }));
    try {
      const { mails } = await this.api.call(PREFERENCE_ROUTES.changeMyPreferences, { body: { mails: { [kind]: value } } });
      this.wanted.update((now) => ({ ...now, [kind]: mails[kind] }));
      this.toasts.say(value === 'on' ? `Mails on: ${name}.` : `Mails off: ${name}.`);
    } catch (fault) {
      this.wanted.update((mails) => ({ ...mails, [kind]: before }));
      this.toasts.fail(sentenceOf(fault));
    }
  }
}
