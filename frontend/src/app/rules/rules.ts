import { ChangeDetectionStrategy, Component, effect, inject, signal, untracked } from '@angular/core';
import { type Rule, RULE_ROUTES } from '#shared/contract/rule-routes';
import { allOf } from '../api/all-of';
import { ApiClient } from '../api/api-client';
import { sentenceOf } from '../api/api-problem';
import { NetworkStore } from '../networks/network-store';
import { SessionStore } from '../session/session-store';
import { Icon } from '../ui/icon';
import { Loader } from '../ui/loaded';
import { Empty, Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { MakeRule } from './make-rule';
import { windowWords } from './window-words';

/** The coincidence rules of the network, and which of them find. */
@Component({
  selector: 'sw-rules',
  imports: [Empty, Fault, Icon, MakeRule, Skeleton],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './rules.html',
  styles: `
    sw-make-rule {
      display: block;
      max-width: 560px;
      margin-bottom: 24px;
    }
  `,
})
export class Rules {
  private readonly api = inject(ApiClient);
  private readonly toasts = inject(ToastStore);
  protected readonly session = inject(SessionStore);
  protected readonly networks = inject(NetworkStore);
  protected readonly making = signal(false);
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

  protected made(rule: Rule): void {
    this.making.set(false);
    this.rules.update((all) => [...all, rule]);
    this.toasts.say(`Rule ${rule.code} made. It finds once it is active.`);
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
