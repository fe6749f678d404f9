import { and, eq, isNull } from 'drizzle-orm';
import { type Warning } from '#shared/contract/setup-leaves';
import { type PositionGiven, type SiteVersion } from '#shared/contract/site-routes';
import { compareInstants, type Instant } from '#shared/time/instant';
import { type Scale } from '#shared/time/scales';
import { clocks, sites, siteVersions } from '#schema/schema';
import { EVER_TAI_S } from '#schema/forms';
import { codeTaken, conflict, unusable } from '../api/refusal';
import { utcText } from '../ground';
import { openNetwork } from '../networks/network-rows';
import { makerOf, noteSetup, type Making } from '../networks/note-setup';
import { placeOf } from './position';
import { siteRow, statesInForce } from './site-rows';

const MOST_SITES = 200;
const MOST_STATES = 500;

/** What a site's readings are reconciled by, from an instant on; null for ever. */
export interface SiteState {
  readonly from: Instant | null;
  readonly scale: Scale;
  readonly clockId: number | null;
  readonly exactClock: boolean;
  readonly position: PositionGiven;
  readonly positionSigmaM: number;
  readonly delayNs: number;
  readonly delaySigmaNs: number;
  readonly readingSigmaNs: number | null;
  readonly origin: SiteVersion['origin'];
  readonly note: string;
}

/** What a site is made from. */
export interface SiteValues {
  readonly networkId: number;
  readonly code: string;
  readonly name?: string | undefined;
  readonly silentAfterS?: number | null | undefined;
  readonly setAsidesPerHour?: number | null | undefined;
  readonly state: SiteState;
}

/** What was made, and what is doubtful about it. */
export interface Made {
  readonly id: number;
  readonly warnings: readonly Warning[];
}

/**
 * Makes a site with its first state.
 *
 * @returns its id, with what is doubtful about its place
 * @throws Refusal when the code is taken, its clock is of another network, or nothing can stand where it is said to
 */
export function makeSite(making: Making, { state, ...values }: SiteValues): Made {
  const { tx, note, actor, nowMs } = making;
  const { networkId, code } = values;
  openNetwork(tx, networkId);
  const codes = tx.select({ code: sites.code }).from(sites).where(eq(sites.networkId, networkId)).all();
  if (codes.length >= MOST_SITES) throw conflict(`The network has ${MOST_SITES} sites, which is the most.`);
  if (codes.some((one) => one.code === code)) throw codeTaken(code, 'site of the network');
  const { id } = tx
    .insert(sites)
    .values({ ...values, name: values.name ?? '', createdAt: utcText(nowMs), createdBy: makerOf(actor) })
    .returning({ id: sites.id })
    .get();
  const warnings = insertState(making, { networkId, siteId: id, number: 1 }, state, 'state.');
  note({ action: 'site:made', subjectKind: 'site', subjectId: id, networkId, details: { code } });
  noteSetup(tx, networkId, { what: 'site', id }, nowMs);
  return { id, warnings };
}

/**
 * States a site anew: the new state takes the place of the one that is named, else of one that begins to hold at the same instant, else of
 * none.
 *
 * @param replaces number of a state in force
 * @returns what is doubtful about it
 */
export function addSiteState(making: Making, siteId: number, state: SiteState, replaces?: number): readonly Warning[] {
  const { tx, note, actor, nowMs } = making;
  const { networkId, version, closedAt } = siteRow(tx, siteId);
  openNetwork(tx, networkId);
  if (closedAt !== null) throw conflict('The site is closed: it has no more states.');
  const inForce = statesInForce(tx, siteId);
  const same = inForce.find(({ from }) => isSame(from, state.from));
  const replaced = replaces === undefined ? same : inForce.find(({ number }) => number === replaces);
  if (replaces !== undefined && !replaced)
    throw unusable({
      where: 'replaces',
      text: `is ${replaces}; it must be the number of a state in force: ${inForce.map(({ number }) => number).join(', ')}`,
    });
  if (same && same !== replaced) throw conflict(`State ${same.number} begins at the same instant and is in force: replace that one.`);
  const known = tx.select({ number: siteVersions.number }).from(siteVersions).where(eq(siteVersions.siteId, siteId)).all();
  if (known.length >= MOST_STATES) throw conflict(`The site has had ${MOST_STATES} states, which is the most.`);
  const number = 1 + known.reduce((most, one) => Math.max(most, one.number), 0);
  if (replaced)
    tx.update(siteVersions)
      .set({ supersededAt: utcText(nowMs), supersededBy: makerOf(actor) })
      .where(and(eq(siteVersions.id, replaced.id), isNull(siteVersions.supersededAt)))
      .run();
  const former = (replaced ?? inForce.at(-1))?.position?.itrsM;
  const warnings = insertState(making, { networkId, siteId, number }, state, '', former);
  tx.update(sites)
    .set({ version: version + 1 })
    .where(eq(sites.id, siteId))
    .run();
  const details = { number, replaced: replaced?.number ?? null, fromTaiS: state.from?.taiS ?? null };
  note({ action: 'site:stated', subjectKind: 'site', subjectId: siteId, networkId, details });
  noteSetup(tx, networkId, { what: 'site', id: siteId }, nowMs);
  return warnings;
}

const isSame = (a: Instant | null, b: Instant | null): boolean => (a && b ? compareInstants(a, b) === 0 : a === b);

interface Whose {
  readonly networkId: number;
  readonly siteId: number;
  readonly number: number;
}

function insertState(
  { tx, actor, nowMs }: Making,
  { networkId, siteId, number }: Whose,
  state: SiteState,
  path: string,
  former?: readonly [number, number, number],
): readonly Warning[] {
  const { from, clockId, position: stated, ...values } = state;
  if (clockId !== null) {
    const known = tx
      .select({ id: clocks.id })
      .from(clocks)
      .where(and(eq(clocks.id, clockId), eq(clocks.networkId, networkId)))
      .get();
    if (!known) throw unusable({ where: `${path}clockId`, text: `is ${clockId}; it must be the id of a clock of this network` });
  }
  const { position, warnings } = placeOf(stated, `${path}position`, former);
  const [itrsXM, itrsYM, itrsZM] = position.itrsM;
  tx.insert(siteVersions)
    .values({
      ...values,
      siteId,
      number,
      clockId,
      fromTaiS: from ? from.taiS : EVER_TAI_S,
      fromPs: from ? from.ps : 0,
      positionKind: position.stated,
      ...(position.stated === 'geodetic' ? position.geodetic : {}),
      itrsXM,
      itrsYM,
      itrsZM,
      createdAt: utcText(nowMs),
      createdBy: makerOf(actor),
    })
    .run();
  return warnings;
}
