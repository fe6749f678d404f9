import { isNull } from 'drizzle-orm';
import { networks } from '#schema/schema';
import { type Tx } from '../audit/change';
import { noteSetup, type SetupChange } from '../networks/note-setup';

/** Numbers a change of what all networks rest on in each that is open. */
export function tellAllNetworks(tx: Tx, changed: SetupChange, nowMs: number): void {
  for (const { id } of tx.select({ id: networks.id }).from(networks).where(isNull(networks.closedAt)).all())
    noteSetup(tx, id, changed, nowMs);
}
