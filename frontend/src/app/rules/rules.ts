import { ChangeDetectionStrategy, Component, effect, inject, signal, untracked } from '@angular/core';
import { type Rule, RULE_ROUTES } from '#shared/contract/rule-routes';
import { type Warning } from '#shared/contract/setup-leaves';
import { allOf } from '../api/all-of';
import { ApiClient } from '../api/api-client';
import { sentenceOf } from '../api/api-problem';
import { NetworkStore } from '../networks/network-store';
import { SessionStore } from '../session/session-store';
import { siteCodes } from '../sites/site-codes';
import { Term } from '../terms/term';
import { Icon } from '../ui/icon';
import { Loader } from '../ui/loaded';
import { Empty, Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { Told } from '../ui/told';
import { RuleForm, type RuleTold } from './rule-form';
import { windowWords } from './window-words';

/** The coincidence rules of the network, and which of them find. */
@Component({
  selector: 'sw-rules',
  imports: [Empty, Fault, Icon, RuleForm, Skeleton, Term, Told],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './rules.html',
  styles: `
    sw-rule-form {
      display: block;
      max-width: 820px;
      margin-bottom: 24px;
    }
  `,
})
export class Rules {
  private readonly api = inject(ApiClient);
  private readonly toasts = inject(ToastStore);
  protected readonly session = inject(SessionStore);
  protected readonly networks = inject(NetworkStore);
  /** The form that is open, and the rule that it changes. */
  protected readonly form = signal<{ readonly rule: Rule | undefined } | undefined>(undefined);
  /** What is doubtful about the rule that was just stated. */
  protected readonly warnings = signal<readonly Warning[]>([]);
  protected readonly words = windowWords;
  protected readonly rules = new Loader<readonly Rule[]>(() => {
    const networkId = this.networks.network()?.id ?? 0;
    return networkId === 0 ? Promise.resolve([]) : allOf((query) => this.api.call(RULE_ROUTES.listRules, { params: { networkId }, query }));
  });

  constructor() {
    effect(() => {
      this.networks.network();
      if (this.networks.networks.state().kind === 'loaded') untracked(() => void this.rules.load());
    });
  }

  protected siteWords({ now: { siteIds } }: Rule): string {
    if (siteIds.length === 0) return 'all';
    return siteCodes(siteIds, this.networks.sites.value() ?? []);
  }

  protected stated({ rule, warnings }: RuleTold): void {
    const isNew = this.form()?.rule === undefined;
    this.form.set(undefined);
    this.warnings.set(warnings);
    this.rules.update((all) => (isNew ? [...all, rule] : all.map((one) => (one.id === rule.id ? rule : one))));
    this.toasts.say(isNew ? `Rule ${rule.code} made. It finds once it is active.` : `Rule ${rule.code} changed.`);
  }

  /** Turns a rule on or off; for a while that can be taken back. */
  protected async turn(rule: Rule, undoable = true): Promise<void> {
    const route = rule.isActive ? RULE_ROUTES.deactivateRule : RULE_ROUTES.activateRule;
    try {
      const turned = await this.api.call(route, { params: { ruleId: rule.id }, body: { version: rule.version } });
      this.rules.update((all) => all.map((one) => (one.id === turned.id ? turned : one)));
      const text = turned.isActive ? `Rule ${rule.code} finds coincidences now.` : `Rule ${rule.code} finds no more.`;
      this.toasts.say(text, undoable ? () => this.turn(turned, false) : undefined);
    } catch (fault) {
      this.toasts.fail(sentenceOf(fault));
    }
  }
}
