import { ChangeDetectionStrategy, Component, effect, inject, signal, untracked } from '@angular/core';
import { type Run, RUN_ROUTES } from '#shared/contract/network-routes';
import { allOf } from '../api/all-of';
import { ApiClient } from '../api/api-client';
import { sentenceOf } from '../api/api-problem';
import { References } from '../clocks/references';
import { InstantMark } from '../instants/instant';
import { deviceInstant } from '../instants/server-instant';
import { SessionStore } from '../session/session-store';
import { Term } from '../terms/term';
import { Icon } from '../ui/icon';
import { Loader } from '../ui/loaded';
import { Empty, Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { MakeNetwork } from './make-network';
import { MakeRun } from './make-run';
import { NetworkStore } from './network-store';

/** The network that all pages are about, and its data-taking runs. */
@Component({
  selector: 'sw-network',
  imports: [Empty, Fault, Icon, InstantMark, MakeNetwork, MakeRun, References, Skeleton, Term],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './network.html',
  styleUrl: './network.scss',
})
export class NetworkPage {
  private readonly api = inject(ApiClient);
  private readonly toasts = inject(ToastStore);
  protected readonly session = inject(SessionStore);
  protected readonly networks = inject(NetworkStore);
  protected readonly making = signal<'nothing' | 'network' | 'run'>('nothing');
  protected readonly runs = new Loader<readonly Run[]>(() => {
    const networkId = this.networks.network()?.id ?? 0;
    return networkId === 0 ? Promise.resolve([]) : allOf((query) => this.api.call(RUN_ROUTES.listRuns, { params: { networkId }, query }));
  });

  constructor() {
    effect(() => {
      if (this.networks.network()) untracked(() => void this.runs.load());
    });
  }

  protected made(name: string): void {
    this.making.set('nothing');
    this.toasts.say(`Network ${name} made.`);
  }

  protected runMade(run: Run): void {
    this.making.set('nothing');
    this.runs.update((all) => [run, ...all]);
    this.toasts.say(`Run ${run.code} begun.`);
  }

  /** Ends a run now; for a while that can be taken back. */
  protected async end(run: Run): Promise<void> {
    const ended = await this.give(run, deviceInstant());
    if (ended) this.toasts.say(`Run ${run.code} ended.`, () => this.give(ended, null));
  }

  private async give(run: Run, to: Run['to']): Promise<Run | undefined> {
    try {
      const changed = await this.api.call(RUN_ROUTES.changeRun, {
        params: { runId: run.id },
        body: { to, version: run.version },
      });
      this.runs.update((all) => all.map((one) => (one.id === run.id ? changed : one)));
      return changed;
    } catch (fault) {
      this.toasts.fail(sentenceOf(fault));
      return undefined;
    }
  }
}
