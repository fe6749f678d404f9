import { type Route, type Routes } from '@angular/router';
import { type PolicyName } from '#shared/contract/policies';
import { homeGuard } from './shell/home-guard';
import { knownGuard, mayGuard, signedInGuard, strangerGuard } from './session/session-guards';

const noPermission = () => import('./shell/not-permitted').then((file) => file.NotPermitted);

/** A page for whoever may do what a policy allows; everyone else who is signed in reads that they may not. */
const pageFor = (policy: PolicyName, page: Route & { readonly path: string }): Routes => [
  { ...page, canMatch: [mayGuard(policy)] },
  { path: page.path, title: 'Not permitted', loadComponent: noPermission },
];

/** Pages in the frame of the application, for who is signed in. */
const inside: Routes = [
  { path: '', pathMatch: 'full', canActivate: [homeGuard], children: [] },
  ...pageFor('network:make', {
    path: 'first-steps',
    title: 'First steps',
    loadComponent: () => import('./first-steps/first-steps').then((file) => file.FirstSteps),
  }),
  { path: 'desk', title: 'Desk', loadComponent: () => import('./desk/desk').then((file) => file.Desk) },
  ...pageFor('pair:read', {
    path: 'pair/:eventA/:eventB',
    title: 'Pair',
    loadComponent: () => import('./pair/pair-page').then((file) => file.PairPage),
  }),
  { path: 'account', title: 'Your account', loadComponent: () => import('./account/account').then((file) => file.Account) },
  ...pageFor('network:read', {
    path: 'network',
    title: 'Network',
    loadComponent: () => import('./networks/network').then((file) => file.NetworkPage),
  }),
  ...pageFor('site:list', { path: 'sites', title: 'Sites', loadComponent: () => import('./sites/sites').then((file) => file.Sites) }),
  ...pageFor('site:read', {
    path: 'sites/:siteId',
    title: 'Site',
    loadComponent: () => import('./sites/site').then((file) => file.SitePage),
  }),
  ...pageFor('set-aside:list', {
    path: 'set-asides',
    title: 'Set-asides',
    loadComponent: () => import('./set-asides/set-asides').then((file) => file.SetAsides),
  }),
  ...pageFor('frame:list', { path: 'frames', title: 'Frames', loadComponent: () => import('./frames/frames').then((file) => file.Frames) }),
  ...pageFor('rule:list', { path: 'rules', title: 'Rules', loadComponent: () => import('./rules/rules').then((file) => file.Rules) }),
  ...pageFor('time-tables:read', {
    path: 'tables',
    title: 'Time and Earth',
    loadComponent: () => import('./tables/tables').then((file) => file.Tables),
  }),
  ...pageFor('person:list', {
    path: 'people',
    title: 'People',
    loadComponent: () => import('./coordinate/people').then((file) => file.People),
  }),
  ...pageFor('person:read', {
    path: 'people/:personId',
    title: 'Person',
    loadComponent: () => import('./coordinate/person').then((file) => file.PersonPage),
  }),
  ...pageFor('audit:read', {
    path: 'audit',
    title: 'Audit trail',
    loadComponent: () => import('./coordinate/audit').then((file) => file.Audit),
  }),
  ...pageFor('kept-mail:read', {
    path: 'mails',
    title: 'Mails',
    loadComponent: () => import('./coordinate/mails').then((file) => file.Mails),
  }),
];

/** The pages. Each is fetched when it is first opened, and names itself in the title. */
export const routes: Routes = [
  {
    path: 'sign-in',
    title: 'Sign in',
    canActivate: [strangerGuard],
    loadComponent: () => import('./sign-in/sign-in').then((file) => file.SignIn),
  },
  {
    path: 'forgotten-password',
    title: 'A new password',
    loadComponent: () => import('./sign-in/forgotten-password').then((file) => file.ForgottenPassword),
  },
  {
    path: 'invitation',
    title: 'Welcome',
    data: { purpose: 'invitation' },
    loadComponent: () => import('./sign-in/choose-password').then((file) => file.ChoosePassword),
  },
  {
    path: 'new-password',
    title: 'A new password',
    data: { purpose: 'reset' },
    loadComponent: () => import('./sign-in/choose-password').then((file) => file.ChoosePassword),
  },
  { path: 'about', title: 'One order, where there is one', loadComponent: () => import('./about/about').then((file) => file.About) },
  {
    path: '',
    loadComponent: () => import('./shell/shell').then((file) => file.Shell),
    canActivate: [signedInGuard],
    children: inside,
  },
  {
    path: '**',
    title: 'No such page',
    canMatch: [knownGuard],
    loadComponent: () => import('./shell/shell').then((file) => file.Shell),
    children: [{ path: '**', title: 'No such page', loadComponent: () => import('./shell/not-here').then((file) => file.NotHere) }],
  },
  { path: '**', title: 'No such page', loadComponent: () => import('./about/no-such-page').then((file) => file.NoSuchPage) },
];
