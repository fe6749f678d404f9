import { setTimeout as sleep } from 'node:timers/promises';
import { type Ground } from '../ground';
import { auditSteps, type AuditVerdict } from './verify';

const BETWEEN_STEPS_MS = 10;

type Sources = Pick<Ground, 'db' | 'auditHead'>;

/** A check of the trail on its way. */
export interface TrailCheck {
  /** Undefined when it was stopped before its end. */
  readonly verdict: Promise<AuditVerdict | undefined>;
  readonly stop: () => void;
}

/** Checks the whole trail in steps, with pauses for what else the thread has to do. */
export function checkTrail({ db, auditHead }: Sources): TrailCheck {
  let stopped = false;
  const run = async (): Promise<AuditVerdict | undefined> => {
    const step = auditSteps(db, auditHead);
    for (;;) {
      await sleep(BETWEEN_STEPS_MS, undefined, { ref: false });
      if (stopped) return undefined;
      const verdict = step();
      if (verdict) return verdict;
    }
  };
  return { verdict: run(), stop: () => void (stopped = true) };
}

/**
 * Checks the trail once the server has started. At 100,000 entries it is 1 s of work (measured: `ROWS_AT_ONCE` of `verify.ts`) and 2 s of pauses,
 * for which nobody should wait. What it finds is an error in the log.
 */
export function checkTrailAtStart(ground: Sources & Pick<Ground, 'log'>): () => void {
  const { log } = ground;
  const { verdict, stop } = checkTrail(ground);
  verdict.then(
    (found) => {
      if (found?.fault) log.error({ event: 'audit:broken', ...found.fault }, brokenText(found.fault));
      else if (found) log.debug({ event: 'audit:checked', entries: found.sound }, 'the audit trail is as it was written');
    },
    (fault: unknown) => log.error({ err: fault }, 'the audit trail could not be checked'),
  );
  return stop;
}

/** What is wrong with a trail, in a sentence. */
export const brokenText = ({ seq, text }: NonNullable<AuditVerdict['fault']>): string =>
  `the audit trail is not what was written: entry ${seq} ${text}`;
