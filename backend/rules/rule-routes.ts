import { USUAL_ITEMS } from '#shared/contract/page';
import { RULE_ROUTES } from '#shared/contract/rule-routes';
import { type TimeGiven } from '#shared/contract/setup-leaves';
import { actorOf } from '../accounts/actor';
import { pageFrom } from '../api/page';
import { stale } from '../api/refusal';
import { serve, type Asked, type Served } from '../api/serve';
import { change } from '../audit/change';
import { type Ground } from '../ground';
import { placeOfNetwork } from '../networks/network-rows';
import { type Making } from '../networks/note-setup';
import { timeReader, type TimeReader } from '../tables/times-given';
import { changeRule, makeRule, setActive, type RuleStateValues } from './make-rule';
import { placeOfRule, ruleOfId, ruleRow, rulesAfter, ruleVersionsOf } from './rule-rows';

/** The coincidence rules of a network. */
export const ruleRoutes = (): Served[] => [
  serve(RULE_ROUTES.listRules, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: ({ params: { networkId }, query: { cursor = 0, limit = USUAL_ITEMS } }, { db }) =>
      pageFrom(rulesAfter(db, networkId, cursor, limit + 1), limit, ({ id }) => id),
  }),
  serve(RULE_ROUTES.readRule, {
    placeOf: ({ params: { ruleId } }, { db }) => placeOfRule(db, ruleId),
    handle: ({ params: { ruleId } }, { db }) => ruleOfId(db, ruleId),
  }),
  serve(RULE_ROUTES.listRuleVersions, {
    placeOf: ({ params: { ruleId } }, { db }) => placeOfRule(db, ruleId),
    handle: ({ params: { ruleId }, query: { cursor, limit = USUAL_ITEMS } }, { db }) =>
      pageFrom(ruleVersionsOf(db, ruleId, cursor, limit + 1), limit, ({ id }) => id),
  }),
  serve(RULE_ROUTES.makeRule, {
    placeOf: ({ params: { networkId } }, { db }) => placeOfNetwork(db, networkId),
    handle: (asked, ground) => {
      const actor = actorOf(asked);
      const { networkId } = asked.params;
      const { state: given, ...values } = asked.body;
      const times = timeReader(ground.db);
      const state = stateValues(given, times);
      return change(ground, actor, (tx, note) => {
        const id = makeRule({ tx, note, actor, nowMs: ground.nowMs() }, { networkId, ...values, state });
        return { ...ruleOfId(tx, id), warnings: times.warnings };
      });
    },
  }),
  serve(RULE_ROUTES.changeRule, {
    placeOf: ({ params: { ruleId } }, { db }) => placeOfRule(db, ruleId),
    handle: (asked, ground) => {
      const times = timeReader(ground.db);
      const { name, state: given } = asked.body;
      const state = given && stateValues(given, times);
      const rule = changed(asked, ground, (making, ruleId) => changeRule(making, ruleId, { name, state }));
      return { ...rule, warnings: times.warnings };
    },
  }),
  serve(RULE_ROUTES.activateRule, {
    placeOf: ({ params: { ruleId } }, { db }) => placeOfRule(db, ruleId),
    handle: (asked, ground) => changed(asked, ground, (making, ruleId) => setActive(making, ruleId, true)),
  }),
  serve(RULE_ROUTES.deactivateRule, {
    placeOf: ({ params: { ruleId } }, { db }) => placeOfRule(db, ruleId),
    handle: (asked, ground) => changed(asked, ground, (making, ruleId) => setActive(making, ruleId, false)),
  }),
];

type RuleAsked = Asked<{ readonly ruleId: number }, unknown, { readonly version: number }>;

/** A change of a rule that was seen at its version. */
function changed(asked: RuleAsked, ground: Ground, work: (making: Making, ruleId: number) => void) {
  const actor = actorOf(asked);
  const { ruleId } = asked.params;
  return change(ground, actor, (tx, note) => {
    if (ruleRow(tx, ruleId).version !== asked.body.version) throw stale();
    work({ tx, note, actor, nowMs: ground.nowMs() }, ruleId);
    return ruleOfId(tx, ruleId);
  });
}

type ExclusionGiven = Omit<NonNullable<RuleStateValues['exclusions']>[number], 'from' | 'to'> & {
  readonly from: TimeGiven;
  readonly to: TimeGiven;
};
type StateGiven = Omit<RuleStateValues, 'exclusions'> & { readonly exclusions?: readonly ExclusionGiven[] | undefined };

const stateValues = ({ exclusions = [], ...state }: StateGiven, { read }: TimeReader): RuleStateValues => ({
  ...state,
  exclusions: exclusions.map(({ from, to, ...one }, at) => ({
    ...one,
    from: read(from, `state.exclusions[${at}].from`),
    to: read(to, `state.exclusions[${at}].to`),
  })),
});
