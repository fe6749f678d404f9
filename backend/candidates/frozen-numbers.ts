import { type FrozenInputs, type FrozenResults } from '#shared/contract/certificate';
import { USUAL_SIGMAS } from '#shared/contract/pair-routes';
import { recomputed } from '#shared/contract/recompute';
import { type Outcome } from '#shared/outcome';
import { differences } from '#shared/review/differences';
import { conflict } from '../api/refusal';
import { type Db } from '../db';
import { earthBarycentricVelocityMS } from '../frames/ephemeris';
import { setInFull } from '../pairs/set-in-full';
import { part, rowsOf } from '../search/query';
import { candidateEventsOf, candidateFramesOf, candidateSetsOf, type CandidateRow } from './candidate-rows';
import { frozenInputs } from './frozen-inputs';

/** What the numbers of a candidate rest on, and the numbers. */
export interface FrozenNumbers {
  readonly inputs: FrozenInputs;
  readonly results: FrozenResults;
  /** Of the events, in the order of the results. */
  readonly events: readonly { readonly id: number; readonly version: number }[];
}

function must<T>(outcome: Outcome<T>): T {
  if (!outcome.ok) throw conflict(`The candidate cannot be frozen now: ${outcome.problem.where} ${outcome.problem.text}.`);
  return outcome.value;
}

/** The one rule by which all of a candidate's coincidences are found; null where there is none, or more. */
function ruleOf(db: Db, { id, networkId }: Pick<CandidateRow, 'id' | 'networkId'>): number | null {
  const hashes = JSON.stringify(candidateSetsOf(db, id).map(({ setHash }) => setHash));
  const rules = rowsOf<{ ruleId: number }>(
    db,
    part(
      `SELECT DISTINCT v.rule_id AS ruleId FROM json_each(?) i CROSS JOIN coincidences c ON c.network_id = ? AND c.set_hash = i.value
       JOIN rule_versions v ON v.id = c.rule_version_id WHERE c.is_current = 1`,
      hashes,
      networkId,
    ),
  );
  return rules.length === 1 ? (rules[0]?.ruleId ?? null) : null;
}

/**
 * Reads all that a candidate's numbers rest on, and computes them from that alone.
 *
 * @throws Refusal where an event does not stand, or is being computed anew: then what is stored is not yet what its inputs give
 */
export function frozenNumbers(db: Db, candidate: Pick<CandidateRow, 'id' | 'networkId'>): FrozenNumbers {
  const { id, networkId } = candidate;
  const triggerIds = candidateEventsOf(db, id).flatMap(({ eventId, isIn }) => (isIn ? [eventId] : []));
  const codes = candidateFramesOf(db, id).map(({ code }) => code);
  const asked = { networkId, triggerIds, frames: codes, sigmas: USUAL_SIGMAS, ruleId: ruleOf(db, candidate) };
  const inputs = must(frozenInputs(db, asked));
  const results = must(recomputed(inputs, earthBarycentricVelocityMS));
  const stored = setInFull(db, { networkId, eventIds: triggerIds, frames: results.frames.map(({ code }) => code), sigmas: USUAL_SIGMAS });
  const { events, frames, pairs } = stored;
  const now = { events: events.map(({ id: _id, version: _version, ...event }) => event), frames, pairs };
  const [first] = differences(now, results);
  if (first)
    throw conflict(
      `The candidate cannot be frozen now: ${first.path} is not what the readings give, since its events are being computed anew.`,
    );
  return { inputs, results, events: events.map(({ id: eventId, version }) => ({ id: eventId, version })) };
}
