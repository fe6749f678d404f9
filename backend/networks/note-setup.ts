import { type Actor, type Note, type Tx } from '../audit/change';
import { noteChange } from '../live/note-change';

/** What of a network's set-up changed, as subscribers are told. */
export interface SetupChange {
  readonly what: 'network' | 'run' | 'site' | 'clock' | 'time-reference' | 'frame' | 'leap-second-table' | 'orientation-table';
  readonly id: number;
}

/** Numbers a change of what a network is set up from, in the transaction that makes it. */
export const noteSetup = (tx: Tx, networkId: number, changed: SetupChange, nowMs: number): number =>
  noteChange(tx, networkId, 'setup', changed, nowMs);

/** What a thing is made with: the transaction, its line for the audit trail, who makes it, and the server's clock. */
export interface Making {
  readonly tx: Tx;
  readonly note: (note: Note) => void;
  readonly actor: Actor;
  readonly nowMs: number;
}

/** The person in `created_by`; null where the program itself makes something. */
export const makerOf = (actor: Actor): number | null => (actor.kind === 'person' ? actor.id : null);
