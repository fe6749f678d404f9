import { HttpErrorResponse, httpResource } from '@angular/common/http';
import { ChangeDetectionStrategy, Component, linkedSignal } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { MatButton } from '@angular/material/button';
import { filter, fromEvent, interval, merge } from 'rxjs';
import { type Health, readHealth, readProblem } from './health';

/** How old what the panel says can be. */
const ASK_EVERY_MS = 15_000;

type State =
  | { readonly kind: 'asking' }
  | { readonly kind: 'answers'; readonly health: Health; readonly at: Date }
  | { readonly kind: 'fails'; readonly detail: string; readonly id: string | undefined }
  | { readonly kind: 'silent'; readonly lastAt: Date | undefined };

/** Whether the server and its database answer, asked now and again while the page is looked at. */
@Component({
  selector: 'sw-health-panel',
  imports: [MatButton],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './health-panel.html',
  styleUrl: './health-panel.scss',
})
export class HealthPanel {
  private readonly answer = httpResource(() => '/api/health', { parse: readHealth });
  protected readonly asking = this.answer.isLoading;

  /** What was known stays on screen while it is asked again. */
  protected readonly state = linkedSignal<{ loading: boolean; error: Error | undefined; health: Health | undefined }, State>({
    source: () => ({
      loading: this.answer.isLoading(),
      error: this.answer.error(),
      health: this.answer.hasValue() ? this.answer.value() : undefined,
    }),
    computation: ({ loading, error, health }, before) => {
      if (loading) return before?.value ?? { kind: 'asking' };
      if (health) return { kind: 'answers', health, at: new Date() };
      return faultState(error, before?.value);
    },
  });

  constructor() {
    const whileSeen = interval(ASK_EVERY_MS).pipe(filter(() => document.visibilityState === 'visible'));
    merge(whileSeen, fromEvent(window, 'online'), fromEvent(window, 'offline'))
      .pipe(takeUntilDestroyed())
      .subscribe(() => this.ask());
  }

  protected ask(): void {
    this.answer.reload();
  }

  /** An instant is never printed without its scale. */
  protected utc(instant: Date | string): string {
    return `${new Date(instant).toISOString().slice(0, 19).replace('T', ' ')} UTC`;
  }
}

function faultState(fault: Error | undefined, before: State | undefined): State {
  if (!(fault instanceof HttpErrorResponse)) {
    const detail = `The server answered what this page cannot read: ${fault?.message ?? 'nothing'}. Reload the page to get its newer version.`;
    return { kind: 'fails', detail, id: undefined };
  }
  if (fault.status === 0) {
    const lastAt = before?.kind === 'answers' ? before.at : before?.kind === 'silent' ? before.lastAt : undefined;
    return { kind: 'silent', lastAt };
  }
  const { detail = `The server answered with status ${fault.status}.`, id } = readProblem(fault.error);
  return { kind: 'fails', detail, id };
}
