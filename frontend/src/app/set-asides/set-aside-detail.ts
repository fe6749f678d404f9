import { ChangeDetectionStrategy, Component, effect, inject, input, output, signal, untracked } from '@angular/core';
import { FormGroup, ReactiveFormsModule } from '@angular/forms';
import * as z from 'zod';
import { SET_ASIDE_ROUTES, type SetAsideInFull } from '#shared/contract/set-aside-routes';
import { ApiClient } from '../api/api-client';
import { InstantMark } from '../instants/instant';
import { SessionStore } from '../session/session-store';
import { textControl } from '../ui/controls';
import { Field } from '../ui/field';
import { Loader } from '../ui/loaded';
import { Sending } from '../ui/sending';
import { Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { fieldsSent } from './fields-of';
import { MendForm } from './mend-form';
import { REASON_WORDS } from './reason-words';

/** One record that was set aside: what the site sent, what is wrong with it, and the three ways on. */
@Component({
  selector: 'sw-set-aside-detail',
  imports: [Fault, Field, InstantMark, MendForm, ReactiveFormsModule, Skeleton],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './set-aside-detail.html',
  styleUrl: './set-aside-detail.scss',
})
export class SetAsideDetail {
  private readonly api = inject(ApiClient);
  private readonly toasts = inject(ToastStore);
  protected readonly session = inject(SessionStore);
  readonly setAsideId = input.required<number>();
  readonly decided = output();
  readonly closed = output();

  protected readonly one = new Loader<SetAsideInFull>(() =>
    this.api.call(SET_ASIDE_ROUTES.readSetAside, { params: { setAsideId: this.setAsideId() } }),
  );
  protected readonly words = REASON_WORDS;
  protected readonly fields = fieldsSent;
  /** What is being decided. */
  protected readonly act = signal<'nothing' | 'mend' | 'dismiss'>('nothing');
  protected readonly form = new FormGroup({ why: textControl(z.string().trim().min(1, 'why it is dismissed')) });
  protected readonly dismissing = new Sending(this.form);
  protected readonly accepting = new Sending(new FormGroup({}));

  constructor() {
    effect(() => {
      this.setAsideId();
      untracked(() => {
        this.act.set('nothing');
        this.form.reset();
        void this.one.load();
      });
    });
  }

  protected accept({ id: setAsideId, version }: SetAsideInFull): Promise<boolean> {
    return this.accepting.send(async () => {
      const body = { version, why: '' };
      this.done(await this.api.call(SET_ASIDE_ROUTES.acceptSetAside, { params: { setAsideId }, body }));
    });
  }

  protected dismiss({ id: setAsideId, version, reason }: SetAsideInFull, isWhole: boolean): Promise<boolean> {
    const route = isWhole && reason === 'conflict' ? SET_ASIDE_ROUTES.dismissConflict : SET_ASIDE_ROUTES.dismissSetAside;
    return this.dismissing.send(async () => {
      this.done(await this.api.call(route, { params: { setAsideId }, body: { version, why: this.form.getRawValue().why } }));
    });
  }

  protected done(decided: SetAsideInFull): void {
    this.toasts.say(
      decided.state === 'accepted' ? 'Record accepted: it is an event now.' : 'Record dismissed: it stays set aside for good.',
    );
    this.decided.emit();
  }

  protected readonly when = (ms: number): string => new Date(ms).toISOString();
}
