import { CANDIDATE_ROUTES } from '#shared/contract/candidate-routes';
import { CLOCK_ROUTES, REFERENCE_ROUTES } from '#shared/contract/clock-routes';
import { COINCIDENCE_ROUTES } from '#shared/contract/coincidence-routes';
import { COMMENT_ROUTES } from '#shared/contract/comment-routes';
import { EVENT_ROUTES } from '#shared/contract/event-routes';
import { FRAME_ROUTES } from '#shared/contract/frame-routes';
import { NETWORK_ROUTES, RUN_ROUTES } from '#shared/contract/network-routes';
import { PAIR_ROUTES } from '#shared/contract/pair-routes';
import { MY_ROUTES, PEOPLE_ROUTES, SESSION_ROUTES, SITE_KEY_ROUTES } from '#shared/contract/people-routes';
import { PREFERENCE_ROUTES } from '#shared/contract/preference-routes';
import { AUDIT_ROUTES, HEALTH_ROUTES, KEPT_MAIL_ROUTES } from '#shared/contract/record-routes';
import { REVIEW_ROUTES } from '#shared/contract/review-routes';
import { type Route } from '#shared/contract/routes';
import { RULE_ROUTES } from '#shared/contract/rule-routes';
import { SET_ASIDE_ROUTES } from '#shared/contract/set-aside-routes';
import { SITE_ROUTES } from '#shared/contract/site-routes';
import { SITE_STATE_ROUTES } from '#shared/contract/site-state';
import { STREAM_ROUTES } from '#shared/contract/stream-routes';
import { TABLE_ROUTES } from '#shared/contract/table-routes';

/** Every route that the contract declares; one that is served and not here fails the test of what is served. */
export const DECLARED: readonly Route[] = [
  HEALTH_ROUTES,
  SESSION_ROUTES,
  MY_ROUTES,
  PREFERENCE_ROUTES,
  PEOPLE_ROUTES,
  SITE_KEY_ROUTES,
  NETWORK_ROUTES,
  RUN_ROUTES,
  SITE_ROUTES,
  CLOCK_ROUTES,
  REFERENCE_ROUTES,
  FRAME_ROUTES,
  RULE_ROUTES,
  TABLE_ROUTES,
  EVENT_ROUTES,
  COINCIDENCE_ROUTES,
  PAIR_ROUTES,
  SET_ASIDE_ROUTES,
  CANDIDATE_ROUTES,
  REVIEW_ROUTES,
  COMMENT_ROUTES,
  STREAM_ROUTES,
  SITE_STATE_ROUTES,
  AUDIT_ROUTES,
  KEPT_MAIL_ROUTES,
].flatMap((group) => Object.values<Route>(group));

export const nameOf = ({ method, path }: Route): string => `${method} ${path}`;
