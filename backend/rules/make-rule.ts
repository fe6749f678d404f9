import { and, count, eq, isNull } from 'drizzle-orm';
import { type RuleWindowGiven } from '#shared/contract/rule-routes';
import { compareInstants, type Instant } from '#shared/time/instant';
import { frames, ruleExclusions, rules, ruleSites, ruleVersions, sites } from '#schema/schema';
import { codeTaken, conflict, unusable } from '../api/refusal';
import { utcText } from '../ground';
import { noteChange } from '../live/note-change';
import { openNetwork } from '../networks/network-rows';
import { makerOf, type Making } from '../networks/note-setup';
import { ruleRow } from './rule-rows';

const MOST_RULES = 100;
const MOST_ACTIVE = 8;
const MOST_VERSIONS = 500;

/** What a rule says; what is absent is as in the batch command: at least two sites, three standard errors. */
export interface RuleStateValues {
  readonly minimumFold?: number | undefined;
  readonly sigmas?: number | undefined;
  readonly window: RuleWindowGiven;
  readonly leastAmplitude?: number | null | undefined;
  readonly deadTimeNs?: number | undefined;
  readonly crowdLimit?: number | undefined;
  /** None for all. */
  readonly siteIds?: readonly number[] | undefined;
  readonly exclusions?:
    readonly { readonly siteId: number | null; readonly from: Instant; readonly to: Instant; readonly reason: string }[] | undefined;
}

/** What a rule is made from. */
export interface RuleValues {
  readonly networkId: number;
  readonly code: string;
  readonly name?: string | undefined;
  readonly state: RuleStateValues;
}

/**
 * Makes a rule, which is not active yet.
 *
 * @returns its id
 * @throws Refusal when the code is taken, or a site or frame is not of the network
 */
export function makeRule(making: Making, { networkId, code, name = '', state }: RuleValues): number {
  const { tx, note, actor, nowMs } = making;
  openNetwork(tx, networkId);
  const codes = tx.select({ code: rules.code }).from(rules).where(eq(rules.networkId, networkId)).all();
  if (codes.length >= MOST_RULES) throw conflict(`The network has ${MOST_RULES} rules, which is the most.`);
  if (codes.some((one) => one.code === code)) throw codeTaken(code, 'rule of the network');
  const { id } = tx
    .insert(rules)
    .values({ networkId, code, name, isActive: false, createdAt: utcText(nowMs), createdBy: makerOf(actor) })
    .returning({ id: rules.id })
    .get();
  insertState(making, networkId, id, 1, state);
  note({ action: 'rule:made', subjectKind: 'rule', subjectId: id, networkId, details: { code } });
  noteChange(tx, networkId, 'rule', { ruleId: id }, nowMs);
  return id;
}

/** Changes a rule's name, and what it says by another version. Refuses as its making does. */
export function changeRule(
  making: Making,
  ruleId: number,
  { name, state }: { name?: string | undefined; state?: RuleStateValues | undefined },
): void {
  const { tx, note, actor, nowMs } = making;
  const { networkId, version } = ruleRow(tx, ruleId);
  openNetwork(tx, networkId);
  const [known] = tx.select({ versions: count() }).from(ruleVersions).where(eq(ruleVersions.ruleId, ruleId)).all();
  const number = known?.versions ?? 0;
  if (state) {
    if (number >= MOST_VERSIONS) throw conflict(`The rule was stated ${MOST_VERSIONS} times, which is the most.`);
    tx.update(ruleVersions)
      .set({ supersededAt: utcText(nowMs), supersededBy: makerOf(actor) })
      .where(and(eq(ruleVersions.ruleId, ruleId), isNull(ruleVersions.supersededAt)))
      .run();
    insertState(making, networkId, ruleId, number + 1, state);
  }
  tx.update(rules)
    .set({ name, version: version + 1 })
    .where(eq(rules.id, ruleId))
    .run();
  note({ action: 'rule:changed', subjectKind: 'rule', subjectId: ruleId, networkId, details: { number: state ? number + 1 : number } });
  noteChange(tx, networkId, 'rule', { ruleId }, nowMs);
}

/** Has coincidences found by a rule, or no more. */
export function setActive({ tx, note, nowMs }: Making, ruleId: number, isActive: boolean): void {
  const { networkId, version, isActive: was } = ruleRow(tx, ruleId);
  openNetwork(tx, networkId);
  if (was === isActive) throw conflict(isActive ? 'The rule is active already.' : 'The rule is not active.');
  const active = tx
    .select({ id: rules.id })
    .from(rules)
    .where(and(eq(rules.networkId, networkId), eq(rules.isActive, true)))
    .all();
  if (isActive && active.length >= MOST_ACTIVE)
    throw conflict(`${MOST_ACTIVE} rules are active, which is the most: make one of them inactive first.`);
  tx.update(rules)
    .set({ isActive, version: version + 1 })
    .where(eq(rules.id, ruleId))
    .run();
  note({ action: isActive ? 'rule:activated' : 'rule:deactivated', subjectKind: 'rule', subjectId: ruleId, networkId });
  noteChange(tx, networkId, 'rule', { ruleId }, nowMs);
}

function insertState({ tx, actor, nowMs }: Making, networkId: number, ruleId: number, number: number, state: RuleStateValues): void {
  const { window, siteIds = [], exclusions = [], minimumFold = 2, sigmas = 3, leastAmplitude = null, deadTimeNs, crowdLimit } = state;
  const known = new Set(
    tx
      .select({ id: sites.id })
      .from(sites)
      .where(eq(sites.networkId, networkId))
      .all()
      .map(({ id }) => id),
  );
  const refuseSite = (siteId: number, where: string): void => {
    if (!known.has(siteId)) throw unusable({ where, text: `is ${siteId}; it must be the id of a site of this network` });
  };
  for (const [at, siteId] of siteIds.entries()) {
    refuseSite(siteId, `state.siteIds[${at}]`);
    if (siteIds.indexOf(siteId) < at)
      throw unusable({ where: `state.siteIds[${at}]`, text: `is ${siteId} for the second time; it must name each site once` });
  }
  if (siteIds.length > 0 && siteIds.length < minimumFold)
    throw unusable({
      where: 'state.siteIds',
      text: `has ${siteIds.length} sites; it must have at least ${minimumFold} ("minimumFold"), or none for all`,
    });
  for (const [at, { siteId, from, to }] of exclusions.entries()) {
    if (siteId !== null) refuseSite(siteId, `state.exclusions[${at}].siteId`);
    if (compareInstants(to, from) < 0)
      throw unusable({ where: `state.exclusions[${at}].to`, text: 'is before "from"; it must be a time not before it' });
  }
  if (window.kind === 'fixed' && typeof window.frameId === 'number') {
    const frame = tx
      .select({ id: frames.id })
      .from(frames)
      .where(and(eq(frames.id, window.frameId), eq(frames.networkId, networkId), isNull(frames.closedAt)))
      .get();
    if (!frame)
      throw unusable({
        where: 'state.window.frameId',
        text: `is ${window.frameId}; it must be the id of an open frame of this network, or null for the geocentric one`,
      });
  }
  const { id: ruleVersionId } = tx
    .insert(ruleVersions)
    .values({
      ruleId,
      number,
      minimumFold,
      sigmas,
      windowKind: window.kind,
      ...(window.kind === 'light-time'
        ? { speedC: window.speedC ?? 1, marginNs: window.marginNs ?? 0 }
        : { widthNs: window.widthNs, frameId: window.frameId ?? null }),
      leastAmplitude,
      deadTimeNs,
      crowdLimit,
      createdAt: utcText(nowMs),
      createdBy: makerOf(actor),
    })
    .returning({ id: ruleVersions.id })
    .get();
  if (siteIds.length > 0)
    tx.insert(ruleSites)
      .values(siteIds.map((siteId) => ({ ruleVersionId, siteId })))
      .run();
  if (exclusions.length > 0)
    tx.insert(ruleExclusions)
      .values(
        exclusions.map(({ siteId, from, to, reason }) => ({
          ruleVersionId,
          siteId,
          fromTaiS: from.taiS,
          fromPs: from.ps,
          toTaiS: to.taiS,
          toPs: to.ps,
          reason,
        })),
      )
      .run();
}
