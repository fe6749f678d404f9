import { and, eq } from 'drizzle-orm';
import { runs } from '#schema/schema';
import { codeTaken, conflict } from '../api/refusal';
import { utcText } from '../ground';
import { openNetwork } from './network-rows';
import { makerOf, noteSetup, type Making } from './note-setup';
import { refuseOverlap, type RunSpan } from './run-rows';

const MOST_RUNS = 10_000;

/** What a run is made from. */
export interface RunValues extends RunSpan {
  readonly networkId: number;
  readonly code: string;
  readonly name?: string | undefined;
}

/** The columns of a run's ends. */
export const spanColumns = ({ from, to }: RunSpan) => ({
  fromTaiS: from.taiS,
  fromPs: from.ps,
  toTaiS: to?.taiS ?? null,
  toPs: to?.ps ?? null,
});

/**
 * Makes a run.
 *
 * @returns its id
 * @throws Refusal when the code is taken, its ends are the wrong way round, or it overlaps another run
 */
export function makeRun({ tx, note, actor, nowMs }: Making, { networkId, code, name = '', ...span }: RunValues): number {
  openNetwork(tx, networkId);
  const ofNetwork = tx.select({ code: runs.code }).from(runs).where(eq(runs.networkId, networkId)).all();
  if (ofNetwork.length >= MOST_RUNS) throw conflict(`The network has ${MOST_RUNS} runs, which is the most.`);
  if (
    tx
      .select({ id: runs.id })
      .from(runs)
      .where(and(eq(runs.networkId, networkId), eq(runs.code, code)))
      .get()
  )
    throw codeTaken(code, 'run of the network');
  refuseOverlap(tx, networkId, span);
  const { id } = tx
    .insert(runs)
    .values({ networkId, code, name, ...spanColumns(span), createdAt: utcText(nowMs), createdBy: makerOf(actor) })
    .returning({ id: runs.id })
    .get();
  note({ action: 'run:made', subjectKind: 'run', subjectId: id, networkId, details: { code } });
  noteSetup(tx, networkId, { what: 'run', id }, nowMs);
  return id;
}
