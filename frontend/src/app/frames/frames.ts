import { ChangeDetectionStrategy, Component, effect, inject, signal, untracked } from '@angular/core';
import { type Frame, FRAME_ROUTES } from '#shared/contract/frame-routes';
import { allOf } from '../api/all-of';
import { ApiClient } from '../api/api-client';
import { sentenceOf } from '../api/api-problem';
import { NetworkStore } from '../networks/network-store';
import { SessionStore } from '../session/session-store';
import { Term } from '../terms/term';
import { ConfirmTyped } from '../ui/confirm-typed';
import { FrameGlyph } from '../ui/frame-glyph';
import { Icon } from '../ui/icon';
import { Loader } from '../ui/loaded';
import { Fault, Skeleton } from '../ui/states';
import { ToastStore } from '../ui/toasts';
import { FrameForm } from './frame-form';

/** The frames of the network as they move in the geocentric one, and which are pinned for the tables of orders. */
@Component({
  selector: 'sw-frames',
  imports: [Fault, FrameForm, FrameGlyph, Icon, Skeleton, Term],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './frames.html',
  styles: `
    sw-frame-form {
      display: block;
      max-width: 560px;
      margin-bottom: 24px;
    }
    sw-frame-glyph {
      width: 26px;
      height: 26px;
    }
  `,
})
export class Frames {
  private readonly api = inject(ApiClient);
  private readonly confirm = inject(ConfirmTyped);
  private readonly toasts = inject(ToastStore);
  protected readonly session = inject(SessionStore);
  protected readonly networks = inject(NetworkStore);
  /** The form that is open, and the frame that it changes. */
  protected readonly form = signal<{ readonly frame: Frame | undefined } | undefined>(undefined);
  protected readonly frames = new Loader<readonly Frame[]>(() => {
    const networkId = this.networks.network()?.id ?? 0;
    return networkId === 0
      ? Promise.resolve([])
      : allOf((query) => this.api.call(FRAME_ROUTES.listFrames, { params: { networkId }, query }));
  });

  constructor() {
    effect(() => {
      this.networks.network();
      if (this.networks.networks.state().kind === 'loaded') untracked(() => void this.frames.load());
    });
  }

  protected async stated(frame: Frame): Promise<void> {
    const isNew = this.form()?.frame === undefined;
    this.form.set(undefined);
    this.toasts.say(isNew ? `Frame ${frame.code} composed.` : `Frame ${frame.code} changed.`);
    await this.frames.load(); // what others move like in it is another
  }

  /** Pins a frame behind those that are, or takes its pin out. */
  protected async pin(frame: Frame): Promise<void> {
    const taken = (this.frames.value() ?? []).map(({ pinned }) => pinned ?? 0);
    await this.do(async () => {
      const body = { pinned: frame.pinned === null ? Math.max(0, ...taken) + 1 : null, version: frame.version };
      const changed = await this.api.call(FRAME_ROUTES.changeFrame, { params: { frameId: frame.id }, body });
      this.frames.update((all) => all.map((one) => (one.id === frame.id ? changed : one)));
      this.toasts.say(changed.pinned === null ? `Frame ${frame.code} is not pinned any more.` : `Frame ${frame.code} pinned.`);
    });
  }

  protected async close(frame: Frame): Promise<void> {
    const meant = await this.confirm.ask({
      heading: `Close the frame ${frame.code}`,
      text: 'It is in no list any more; what was submitted with it keeps it. This cannot be undone.',
      word: frame.code,
      act: 'Close the frame',
    });
    if (!meant) return;
    await this.do(async () => {
      await this.api.call(FRAME_ROUTES.closeFrame, { params: { frameId: frame.id }, body: { version: frame.version } });
      this.frames.update((all) => all.filter(({ id }) => id !== frame.id));
      this.toasts.say(`Frame ${frame.code} closed.`);
    });
  }

  private async do(act: () => Promise<void>): Promise<void> {
    try {
      await act();
    } catch (fault) {
      this.toasts.fail(sentenceOf(fault));
    }
  }
}
