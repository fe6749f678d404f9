import { computed, inject, Injectable, signal } from '@angular/core';
import { type Me } from '#shared/contract/people';
import { MY_ROUTES, SESSION_ROUTES } from '#shared/contract/people-routes';
import { policyOf, type PolicyName } from '#shared/contract/policies';
import { coordinatesAll, ROLES, type Role } from '#shared/contract/roles';
import { ApiClient } from '../api/api-client';
import { ApiProblem } from '../api/api-problem';
import { SessionKeeper } from '../api/session-keeper';

/** Who is signed in, and what they may do. */
@Injectable({ providedIn: 'root' })
export class SessionStore {
  private readonly api = inject(ApiClient);
  private readonly keeper = inject(SessionKeeper);
  private readonly known = signal<Me | undefined>(undefined);
  private asked: Promise<Me | undefined> | undefined;

  readonly me = this.known.asReadonly();
  /** The roles held anywhere, each once, in the order of the contract. */
  readonly roles = computed<readonly Role[]>(() => {
    const held = this.known()?.roles ?? [];
    return ROLES.filter((role) => held.some((one) => one.role === role));
  });
  readonly coordinatesAll = computed(() => coordinatesAll(this.known()?.roles ?? []));
  readonly initials = computed(() => initialsOf(this.known()?.name ?? ''));

  constructor() {
    this.keeper.whenEnded(() => Promise.reject(new ApiProblem({ status: 401, text: 'The session has ended: sign in again.' })));
  }

  /** Who is signed in, asked once; a browser that never signed in is not asked after. */
  load(): Promise<Me | undefined> {
    this.asked ??= this.ask();
    return this.asked;
  }

  private async ask(): Promise<Me | undefined> {
    if (this.known() || !this.keeper.begun) return this.known();
    try {
      this.known.set(await this.api.call(MY_ROUTES.readMe, {}));
    } catch (fault) {
      if (!(fault instanceof ApiProblem) || fault.status !== 401) {
        this.asked = undefined;
        throw fault;
      }
      this.keeper.end();
    }
    return this.known();
  }

  /** Signs in, also again in place; a password that is not right is a problem with its sentence. */
  async signIn(email: string, password: string): Promise<Me> {
    const me = await this.api.call(SESSION_ROUTES.signIn, { body: { email, password } });
    this.keeper.begin();
    this.take(me);
    return me;
  }

  /** Ends this session; of a server that is not reached it is forgotten here all the same. */
  async signOut(): Promise<void> {
    this.keeper.end();
    try {
      await this.api.call(SESSION_ROUTES.signOut, {});
    } finally {
      this.forget();
    }
  }

  /** What an answer said of the one who is signed in. */
  take(me: Me): void {
    this.known.set(me);
    this.asked = Promise.resolve(me);
  }

  /** Nobody is signed in here any more. */
  forget(): void {
    this.keeper.end();
    this.known.set(undefined);
    this.asked = undefined;
  }

  /** Whether what a policy allows can be done somewhere: what is hidden or shown. The server judges each request by its place. */
  may(policy: PolicyName): boolean {
    const rule = policyOf(policy);
    if (rule?.who === 'roles') return rule.roles.some((role) => this.roles().includes(role));
    return rule?.who === 'anyone' || (rule?.who === 'signed-in' && this.known() !== undefined);
  }
}

/** Two letters of a name: of its first and its last word. */
export function initialsOf(name: string): string {
  const words = name.split(/\s+/).filter((word) => word !== '');
  const letters = words.length > 1 ? [words[0], words.at(-1)] : words;
  return letters.map((word) => Array.from(word ?? '')[0] ?? '').join('').toLocaleUpperCase('en'); // prettier-ignore
}
