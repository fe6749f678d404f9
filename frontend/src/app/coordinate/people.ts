import { ChangeDetectionStrategy, Component, inject, signal } from '@angular/core';
import { RouterLink } from '@angular/router';
import { type Person } from '#shared/contract/people';
import { PEOPLE_ROUTES } from '#shared/contract/people-routes';
import { ApiClient } from '../api/api-client';
import { Icon } from '../ui/icon';
import { LongList } from '../ui/long-list';
import { Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { InvitePerson } from './invite-person';
import { RoleWords } from './role-words';

/** Everyone of the deployment, and the form that invites another. */
@Component({
  selector: 'sw-people',
  imports: [Fault, Icon, InvitePerson, RoleWords, RouterLink, Skeleton],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './people.html',
  styleUrl: './people.scss',
})
export class People {
  private readonly api = inject(ApiClient);
  private readonly toasts = inject(ToastStore);
  protected readonly inviting = signal(false);
  protected readonly people = new LongList<Person>(
    (cursor) => this.api.call(PEOPLE_ROUTES.listPeople, { query: { cursor } }),
    (text) => this.toasts.fail(text),
  );

  constructor() {
    void this.people.page.load();
  }

  protected invited(person: Person): void {
    this.inviting.set(false);
    this.people.page.update((page) => ({ ...page, items: [...page.items, person] }));
    this.toasts.say(`Invitation sent to ${person.email}.`);
  }
}
