import * as z from 'zod';
import {
  email,
  givenPassword,
  keyLabel,
  mailedToken,
  me,
  newPassword,
  person,
  personName,
  roleGiven,
  roleHeld,
  session,
  siteKey,
  utc,
  version,
  versionSeen,
} from './people';
import { idText, pageOf, pageQuery } from './page';
import { record } from './leaves';
import { route } from './routes';

const MOST_SECRET_BODY_BYTES = 8 * 1024;
const personParams = z.strictObject({ personId: idText });
const siteParams = z.strictObject({ siteId: idText });

/** Signing in and out, and the links that are mailed. */
export const SESSION_ROUTES = {
  signIn: route('POST', '/sign-in', {
    policy: 'session:begin',
    body: record({ email: email(), password: givenPassword() }),
    answer: me,
    mostBodyBytes: MOST_SECRET_BODY_BYTES,
  }),
  refresh: route('POST', '/refresh', { policy: 'session:refresh', answer: me }),
  signOut: route('POST', '/sign-out', { policy: 'session:end' }),
  acceptInvitation: route('POST', '/invitations/accept', {
    policy: 'invitation:accept',
    body: record({ token: mailedToken(), password: newPassword() }),
    mostBodyBytes: MOST_SECRET_BODY_BYTES,
  }),
  askReset: route('POST', '/resets', { policy: 'reset:ask', body: record({ email: email() }) }),
  useReset: route('POST', '/resets/use', {
    policy: 'reset:use',
    body: record({ token: mailedToken(), password: newPassword() }),
    mostBodyBytes: MOST_SECRET_BODY_BYTES,
  }),
};

/** What everyone does with their own account. */
export const MY_ROUTES = {
  readMe: route('GET', '/me', { policy: 'me:read', answer: me }),
  changeMe: route('PATCH', '/me', { policy: 'me:change', body: record({ name: personName(), version: version() }), answer: me }),
  changeMyPassword: route('POST', '/me/password', {
    policy: 'my-password:change',
    body: record({ current: givenPassword(), password: newPassword() }),
    mostBodyBytes: MOST_SECRET_BODY_BYTES,
  }),
  listMySessions: route('GET', '/me/sessions', { policy: 'my-sessions:read', query: record(pageQuery), answer: pageOf(session) }),
  endMySession: route('POST', '/me/sessions/:sessionId/end', {
    policy: 'my-sessions:end',
    params: z.strictObject({ sessionId: idText }),
  }),
  signOutEverywhere: route('POST', '/sign-out-everywhere', { policy: 'my-sessions:end' }),
};

/** What coordinators do with people and their roles. */
export const PEOPLE_ROUTES = {
  listPeople: route('GET', '/people', { policy: 'person:list', query: record(pageQuery), answer: pageOf(person) }),
  readPerson: route('GET', '/people/:personId', { policy: 'person:read', params: personParams, answer: person }),
  invite: route('POST', '/people', {
    policy: 'person:invite',
    body: record({ email: email(), name: personName(), role: roleGiven }),
    answer: person,
    makes: true,
  }),
  inviteAgain: route('POST', '/people/:personId/invite-again', { policy: 'person:invite-again', params: personParams }),
  disablePerson: route('POST', '/people/:personId/disable', {
    policy: 'person:disable',
    params: personParams,
    body: versionSeen(),
    answer: person,
  }),
  enablePerson: route('POST', '/people/:personId/enable', {
    policy: 'person:enable',
    params: personParams,
    body: versionSeen(),
    answer: person,
  }),
  giveRole: route('POST', '/people/:personId/roles', {
    policy: 'role:give',
    params: personParams,
    body: roleGiven,
    answer: roleHeld,
    makes: true,
  }),
  changeRole: route('PATCH', '/roles/:roleId', {
    policy: 'role:change',
    params: z.strictObject({ roleId: idText }),
    body: record({ expiresAt: utc().nullable(), version: version() }),
    answer: roleHeld,
  }),
  takeRole: route('POST', '/roles/:roleId/take', {
    policy: 'role:take',
    params: z.strictObject({ roleId: idText }),
    body: versionSeen(),
  }),
};

/** The keys by which sites send their triggers. */
export const SITE_KEY_ROUTES = {
  listSiteKeys: route('GET', '/sites/:siteId/keys', {
    policy: 'site-key:list',
    params: siteParams,
    query: record(pageQuery),
    answer: pageOf(siteKey),
  }),
  makeSiteKey: route('POST', '/sites/:siteId/keys', {
    policy: 'site-key:make',
    params: siteParams,
    body: record({ label: keyLabel() }),
    /** The one time that the whole key is shown. */
    answer: siteKey.extend({ key: z.string() }),
    makes: true,
  }),
  revokeSiteKey: route('POST', '/sites/:siteId/keys/:keyId/revoke', {
    policy: 'site-key:revoke',
    params: siteParams.extend({ keyId: idText }),
    answer: siteKey,
  }),
  readOwnSiteKey: route('GET', '/site-key', {
    policy: 'site-key:read-own',
    answer: z.strictObject({ label: z.string(), prefix: z.string(), siteCode: z.string(), networkCode: z.string() }),
  }),
};
