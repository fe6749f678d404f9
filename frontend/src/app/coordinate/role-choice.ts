import { ChangeDetectionStrategy, Component, effect, inject, input } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { type RoleGiven } from '#shared/contract/people';
import { NetworkStore } from '../networks/network-store';
import { SessionStore } from '../session/session-store';
import { textControl } from '../ui/controls';
import { Field } from '../ui/field';
import { endOf, roleEnd } from './role-end';

/** What can be chosen: a role, and for a coordinator whether of everything. */
export const ROLE_CHOICES = [
  { value: 'analyst', word: 'Analyst: builds coincidence candidates', of: 'network' },
  { value: 'reviewer', word: 'Reviewer: confirms or disputes them', of: 'network' },
  { value: 'operator', word: 'Operator: runs one site', of: 'site' },
  { value: 'network-coordinator', word: 'Coordinator of one network', of: 'network' },
  { value: 'coordinator', word: 'Coordinator of the whole deployment', of: 'deployment' },
] as const;

type Choice = (typeof ROLE_CHOICES)[number]['value'];

/** The controls of a role that is to be given. */
export const roleForm = (networkId: number) =>
  new FormGroup({
    role: new FormControl<Choice>('analyst', { nonNullable: true }),
    networkId: new FormControl(networkId, { nonNullable: true }),
    siteId: new FormControl(0, { nonNullable: true }),
    expiresAt: textControl(roleEnd()),
  });

export type RoleForm = ReturnType<typeof roleForm>;

/** The role as it crosses the wire. */
export function roleOf(form: RoleForm): RoleGiven {
  const { role, networkId, siteId, expiresAt } = form.getRawValue();
  const of = ROLE_CHOICES.find(({ value }) => value === role)?.of ?? 'network';
  return {
    role: role === 'network-coordinator' ? 'coordinator' : role,
    networkId: of === 'deployment' || networkId === 0 ? null : networkId,
    siteId: of === 'site' && siteId !== 0 ? siteId : null,
    expiresAt: endOf(expiresAt),
  };
}

/** Which role, in which network, for an operator at which site, and until when. */
@Component({
  selector: 'sw-role-choice',
  imports: [Field, ReactiveFormsModule],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <ng-container [formGroup]="form()">
      <sw-field label="Role" [of]="form().controls.role">
        <select class="box" formControlName="role">
          @for (choice of choices(); track choice.value) {
            <option [value]="choice.value">{{ choice.word }}</option>
          }
        </select>
      </sw-field>
      @if (of() !== 'deployment') {
        <sw-field label="Network" [of]="form().controls.networkId">
          <select class="box" formControlName="networkId">
            @for (network of networks.networks.value(); track network.id) {
              <option [ngValue]="network.id">{{ network.name }}</option>
            } @empty {
              <option [ngValue]="0">There is no network yet</option>
            }
          </select>
        </sw-field>
      }
      @if (of() === 'site') {
        <sw-field label="Site" [of]="form().controls.siteId">
          <select class="box" formControlName="siteId">
            @for (site of networks.sites.value(); track site.id) {
              <option [ngValue]="site.id">{{ site.code }} {{ site.name }}</option>
            } @empty {
              <option [ngValue]="0">There is no site yet</option>
            }
          </select>
        </sw-field>
      }
      <sw-field label="Held until, UTC" [of]="form().controls.expiresAt" hint="empty: until it is taken away"
        ><input class="box figure" type="datetime-local" formControlName="expiresAt"
      /></sw-field>
    </ng-container>
  `,
  styles: `
    :host {
      display: grid;
      gap: 14px;
    }
  `,
})
export class RoleChoice {
  protected readonly networks = inject(NetworkStore);
  private readonly session = inject(SessionStore);
  readonly form = input.required<RoleForm>();

  /** Only who coordinates everything gives that to another. */
  protected readonly choices = () => ROLE_CHOICES.filter(({ of }) => of !== 'deployment' || this.session.coordinatesAll());

  constructor() {
    effect(() => {
      const { networkId, siteId } = this.form().controls;
      const [network] = this.networks.networks.value() ?? [];
      const [site] = this.networks.sites.value() ?? [];
      if (networkId.value === 0 && network) networkId.setValue(this.networks.network()?.id ?? network.id);
      if (siteId.value === 0 && site) siteId.setValue(site.id);
    });
  }

  protected of(): 'network' | 'site' | 'deployment' {
    return ROLE_CHOICES.find(({ value }) => value === this.form().controls.role.value)?.of ?? 'network';
  }
}
