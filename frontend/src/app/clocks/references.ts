import { ChangeDetectionStrategy, Component, effect, inject, input, signal, untracked } from '@angular/core';
import { FormGroup, ReactiveFormsModule } from '@angular/forms';
import { REFERENCE_ROUTES, type TimeReference } from '#shared/contract/clock-routes';
import { code } from '#shared/contract/leaves';
import { between, nameOrEmpty, setupNote } from '#shared/contract/setup-leaves';
import { allOf } from '../api/all-of';
import { ApiClient } from '../api/api-client';
import { InstantMark } from '../instants/instant';
import { SessionStore } from '../session/session-store';
import { Term } from '../terms/term';
import { numberControl, textControl } from '../ui/controls';
import { Field } from '../ui/field';
import { FigurePipe } from '../ui/figure';
import { Loader } from '../ui/loaded';
import { Meanwhile } from '../ui/meanwhile';
import { MeanwhileNote } from '../ui/meanwhile-note';
import { numberIn } from '../ui/number-typed';
import { Sending } from '../ui/sending';
import { Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';

/** What the clocks of a network are compared with, and the form that names another or changes its error. */
@Component({
  selector: 'sw-references',
  imports: [Fault, Field, FigurePipe, InstantMark, MeanwhileNote, ReactiveFormsModule, Skeleton, Term],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './references.html',
  styles: `
    .sheet {
      max-width: 560px;
      margin-top: 14px;
    }

    .add {
      margin-top: 14px;
    }
  `,
})
export class References {
  private readonly api = inject(ApiClient);
  private readonly toasts = inject(ToastStore);
  protected readonly session = inject(SessionStore);
  readonly networkId = input.required<number>();
  protected readonly list = new Loader<readonly TimeReference[]>(() =>
    allOf((query) => this.api.call(REFERENCE_ROUTES.listReferences, { params: { networkId: this.networkId() }, query })),
  );
  protected readonly form = new FormGroup({
    code: textControl(code()),
    name: textControl(nameOrEmpty()),
    sigmaNs: numberControl(between(0, 1e15, 'nanoseconds')),
    note: textControl(setupNote()),
  });
  protected readonly sending = new Sending(this.form);
  /** What the form is about: nothing while it is closed, a new one, or one that is there. */
  protected readonly open = signal<'new' | TimeReference | undefined>(undefined);
  protected readonly meanwhile = new Meanwhile<TimeReference>(
    async () => {
      await this.list.load();
      const open = this.open();
      const found = (this.list.value() ?? []).find(({ id }) => open !== 'new' && id === open?.id);
      if (!found) throw new Error('a time reference is never taken out');
      return found;
    },
    ({ name, sigmaNs }) => ({ Name: name, 'Standard error': `${sigmaNs} ns` }),
  );

  constructor() {
    effect(() => {
      this.networkId();
      untracked(() => void this.list.load());
    });
  }

  protected begin(about: 'new' | TimeReference): void {
    this.form.reset();
    if (about !== 'new') this.form.setValue({ code: about.code, name: about.name, sigmaNs: String(about.sigmaNs), note: '' });
    this.open.set(about);
  }

  protected send(): Promise<boolean> {
    const given = this.form.getRawValue();
    const about = this.open();
    const stated = { name: given.name, sigmaNs: numberIn(given.sigmaNs), note: given.note };
    return this.sending.send(async () => {
      if (about === undefined) return;
      if (about === 'new') {
        const params = { networkId: this.networkId() };
        const made = await this.api.call(REFERENCE_ROUTES.makeReference, { params, body: { code: given.code, ...stated } });
        this.list.update((all) => [made, ...all]);
        this.toasts.say(`Time reference ${made.code} named.`);
      } else {
        const params = { referenceId: about.id };
        const changed = await this.meanwhile.around(
          about,
          () => this.api.call(REFERENCE_ROUTES.changeReference, { params, body: { ...stated, version: about.version } }),
          (fresh) => this.open.set(fresh),
        );
        this.list.update((all) => all.map((one) => (one.id === changed.id ? changed : one)));
        this.toasts.say(`Time reference ${changed.code} changed. What leans on it is computed anew.`);
      }
      this.open.set(undefined);
    });
  }
}
