import { inject } from '@angular/core';
import { type CanActivateFn, type CanMatchFn, RedirectCommand, Router } from '@angular/router';
import { type PolicyName } from '#shared/contract/policies';
import { SessionStore } from './session-store';

/** Lets those in who are signed in; others sign in first and come back to where they wanted to go. */
export const signedInGuard: CanActivateFn = async (_route, { url }) => {
  const router = inject(Router);
  const me = await inject(SessionStore).load();
  if (me) return true;
  return new RedirectCommand(router.createUrlTree(['/sign-in'], url === '/' ? {} : { queryParams: { to: url } }));
};

/** Whether someone is signed in: the application's frame stands around what they see. */
export const knownGuard: CanMatchFn = async () => (await inject(SessionStore).load()) !== undefined;

/** Sends those on who are signed in already. */
export const strangerGuard: CanActivateFn = async () => {
  const router = inject(Router);
  return (await inject(SessionStore).load()) === undefined || router.createUrlTree(['/']);
};

/** Matches for who may do this somewhere; without it the page is the one that says that it is not permitted. */
export const mayGuard = (policy: PolicyName): CanMatchFn => {
  return async () => {
    const session = inject(SessionStore);
    await session.load();
    return session.may(policy);
  };
};
