import { ChangeDetectionStrategy, Component, effect, inject, input, signal, untracked } from '@angular/core';
import { ReactiveFormsModule } from '@angular/forms';
import { RouterLink } from '@angular/router';
import { type Person, type RoleHeld } from '#shared/contract/people';
import { PEOPLE_ROUTES } from '#shared/contract/people-routes';
import { ApiClient } from '../api/api-client';
import { sentenceOf } from '../api/api-problem';
import { InstantMark } from '../instants/instant';
import { SessionStore } from '../session/session-store';
import { PageTitle } from '../shell/page-title';
import { Loader } from '../ui/loaded';
import { Sending } from '../ui/sending';
import { Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { ChangeEnd } from './change-end';
import { RoleChoice, roleForm, roleOf } from './role-choice';
import { RoleWords } from './role-words';

/** One person: their roles, their invitation, and whether they may come in at all. */
@Component({
  selector: 'sw-person',
  imports: [ChangeEnd, Fault, InstantMark, ReactiveFormsModule, RoleChoice, RoleWords, RouterLink, Skeleton],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './person.html',
  styleUrl: './person.scss',
})
export class PersonPage {
  private readonly api = inject(ApiClient);
  private readonly toasts = inject(ToastStore);
  private readonly title = inject(PageTitle);
  protected readonly session = inject(SessionStore);

  /** From the address. */
  readonly personId = input.required<string>();
  protected readonly person = new Loader<Person>(() =>
    this.api.call(PEOPLE_ROUTES.readPerson, { params: { personId: Number(this.personId()) } }),
  );
  protected readonly role = roleForm(0);
  protected readonly sending = new Sending(this.role);
  protected readonly giving = signal(false);
  /** The role whose end is being changed. */
  protected readonly ending = signal<number | undefined>(undefined);

  constructor() {
    effect(() => {
      this.personId();
      untracked(() => void this.person.load());
    });
    effect(() => {
      const person = this.person.value();
      if (person) this.title.set(person.name);
    });
  }

  protected async giveRole(person: Person): Promise<void> {
    await this.sending.send(async () => {
      const held = await this.api.call(PEOPLE_ROUTES.giveRole, { params: { personId: person.id }, body: roleOf(this.role) });
      this.person.update((now) => ({ ...now, roles: [...now.roles, held] }));
      this.giving.set(false);
      this.toasts.say(`${person.name} is ${held.role} now.`);
    });
  }

  protected ended(person: Person, changed: RoleHeld): void {
    this.ending.set(undefined);
    this.person.update((now) => ({ ...now, roles: now.roles.map((one) => (one.id === changed.id ? changed : one)) }));
    this.toasts.say(`${person.name}: when the role ${changed.role} ends is said.`);
  }

  protected takeRole(person: Person, { id, role, version, networkId, siteId, expiresAt }: RoleHeld): Promise<void> {
    const again = { role, networkId, siteId, expiresAt };
    return this.do(async () => {
      await this.api.call(PEOPLE_ROUTES.takeRole, { params: { roleId: id }, body: { version } });
      this.person.update((now) => ({ ...now, roles: now.roles.filter((one) => one.id !== id) }));
      this.toasts.say(`${person.name} is no longer ${role}.`, () =>
        this.do(async () => {
          const held = await this.api.call(PEOPLE_ROUTES.giveRole, { params: { personId: person.id }, body: again });
          this.person.update((now) => ({ ...now, roles: [...now.roles, held] }));
        }),
      );
    });
  }

  protected inviteAgain(person: Person): Promise<void> {
    return this.do(async () => {
      await this.api.call(PEOPLE_ROUTES.inviteAgain, { params: { personId: person.id } });
      this.toasts.say(`Invitation sent again to ${person.email}. The one before is void.`);
    });
  }

  protected disable(person: Person): Promise<void> {
    return this.do(async () => {
      const params = { personId: person.id };
      const disabled = await this.api.call(PEOPLE_ROUTES.disablePerson, { params, body: { version: person.version } });
      this.person.update(() => disabled);
      this.toasts.say(`${person.name} is disabled and signed out.`, () => this.enable(disabled));
    });
  }

  protected enable(person: Person): Promise<void> {
    return this.do(async () => {
      const params = { personId: person.id };
      const enabled = await this.api.call(PEOPLE_ROUTES.enablePerson, { params, body: { version: person.version } });
      this.person.update(() => enabled);
      this.toasts.say(`${person.name} can sign in again.`);
    });
  }

  private async do(act: () => Promise<void>): Promise<void> {
    try {
      await act();
    } catch (fault) {
      this.toasts.fail(sentenceOf(fault));
    }
  }
}
