import { inject } from '@angular/core';
import { type CanActivateFn, Router } from '@angular/router';
import { NETWORK_ROUTES } from '#shared/contract/network-routes';
import { ApiClient } from '../api/api-client';
import { SessionStore } from '../session/session-store';

/**
 * Where someone begins: at the desk who sees coincidences, at the sites who runs some, at the account who has no role; and at the first
 * steps who coordinates a deployment without a network.
 */
export const homeGuard: CanActivateFn = async () => {
  const router = inject(Router);
  const api = inject(ApiClient);
  const session = inject(SessionStore);
  if (session.roles().length === 0) return router.createUrlTree(['/account']);
  if (!session.may('coincidence:list')) return router.createUrlTree(['/sites']);
  if (!session.coordinatesAll()) return router.createUrlTree(['/desk']);
  const networks = await api.call(NETWORK_ROUTES.listNetworks, { query: { limit: 1 } }).catch(() => undefined);
  return router.createUrlTree([networks?.items.length === 0 ? '/first-steps' : '/desk']);
};
