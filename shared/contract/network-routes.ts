import * as z from 'zod';
import { code, instant, numberThat, record } from './leaves';
import { idText, pageOf, pageQuery } from './page';
import { utc, versionSeen } from './people';
import { route } from './routes';
import { edit, flag, nameOrEmpty, setupName, timeGiven, wholeNumber, withWarnings } from './setup-leaves';

const MOST_SIGNATURES = 20;
const MOST_STALE_SIGMAS = 1_000;

export const networkParams = z.strictObject({ networkId: idText });

/** A detector network. */
export const network = z.strictObject({
  id: z.int(),
  code: z.string(),
  name: z.string(),
  /** The common origin of all frames, with the geocentre. */
  origin: instant(),
  neededSignatures: z.int(),
  needsSecondFactor: z.boolean(),
  staleAboveSigmas: z.number(),
  version: z.int(),
  createdAt: utc(),
  closedAt: utc().nullable(),
});

/** A data-taking period; both ends belong to it, and none while it goes on. */
export const run = z.strictObject({
  id: z.int(),
  networkId: z.int(),
  code: z.string(),
  name: z.string(),
  from: instant(),
  to: instant().nullable(),
  version: z.int(),
  createdAt: utc(),
});

const neededSignatures = () => wholeNumber(1, MOST_SIGNATURES);
const needsSecondFactor = () => flag('true or false: whether reviewers and coordinators must have a second factor');
const staleAboveSigmas = () =>
  numberThat(`a number of standard errors from 0 to ${MOST_STALE_SIGMAS}`, (value) => value >= 0 && value <= MOST_STALE_SIGMAS);

export const networkGiven = record({
  code: code(),
  name: setupName(),
  origin: timeGiven(),
  neededSignatures: neededSignatures().optional(),
  needsSecondFactor: needsSecondFactor().optional(),
  staleAboveSigmas: staleAboveSigmas().optional(),
});

/** What is absent stays as it is. */
export const networkEdit = edit({
  name: setupName().optional(),
  neededSignatures: neededSignatures().optional(),
  needsSecondFactor: needsSecondFactor().optional(),
  staleAboveSigmas: staleAboveSigmas().optional(),
});

/** Listed are those in which the asker has a role, and that are not closed. Code and origin are for good. */
export const NETWORK_ROUTES = {
  listNetworks: route('GET', '/networks', { policy: 'network:list', query: record(pageQuery), answer: pageOf(network) }),
  readNetwork: route('GET', '/networks/:networkId', { policy: 'network:read', params: networkParams, answer: network }),
  makeNetwork: route('POST', '/networks', {
    policy: 'network:make',
    body: networkGiven,
    answer: network.extend(withWarnings),
    makes: true,
  }),
  changeNetwork: route('PATCH', '/networks/:networkId', {
    policy: 'network:change',
    params: networkParams,
    body: networkEdit,
    answer: network,
  }),
  closeNetwork: route('POST', '/networks/:networkId/close', {
    policy: 'network:close',
    params: networkParams,
    body: versionSeen(),
    answer: network,
  }),
};

/** Runs of one network do not overlap. One is ended by giving it a `to`, and goes on again with null. Latest made first. */
export const RUN_ROUTES = {
  listRuns: route('GET', '/networks/:networkId/runs', {
    policy: 'run:list',
    params: networkParams,
    query: record(pageQuery),
    answer: pageOf(run),
  }),
  makeRun: route('POST', '/networks/:networkId/runs', {
    policy: 'run:make',
    params: networkParams,
    body: record({ code: code(), name: nameOrEmpty().optional(), from: timeGiven(), to: timeGiven().nullable().optional() }),
    answer: run.extend(withWarnings),
    makes: true,
  }),
  changeRun: route('PATCH', '/runs/:runId', {
    policy: 'run:change',
    params: z.strictObject({ runId: idText }),
    body: edit({
      name: nameOrEmpty().optional(),
      from: timeGiven().optional(),
      to: timeGiven().nullable().optional(),
    }),
    answer: run.extend(withWarnings),
  }),
};

export type Network = z.infer<typeof network>;
export type Run = z.infer<typeof run>;
