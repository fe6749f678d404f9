import { computed, inject, Injectable, linkedSignal } from '@angular/core';
import { type FrameMotionStated, FRAME_ROUTES } from '#shared/contract/frame-routes';
import { ApiClient } from '../api/api-client';
import { ApiProblem, sentenceOf } from '../api/api-problem';
import { type Command } from '../commands/command-store';
import { type FrameOption, type FramesOffered } from '../frames/frame-choice';
import { NetworkStore } from '../networks/network-store';
import { SessionStore } from '../session/session-store';
import { ToastStore } from '../ui/toasts';
import { DeskEvents } from './desk-events';
import { DeskPicture } from './desk-picture';
import { DeskPlace } from './desk-place';
import { withUnit } from './figures';

const GEOCENTRIC = 'Geocentric';
const MOST_TRIES = 20; // for a code that no frame has, one that is closed neither
const MOST_OF_CODE = 12;

/** The frames in which the desk can be: at rest, the network's, and the one of its slider. */
@Injectable()
export class DeskFrames {
  private readonly api = inject(ApiClient);
  private readonly session = inject(SessionStore);
  private readonly networks = inject(NetworkStore);
  private readonly toasts = inject(ToastStore);
  private readonly place = inject(DeskPlace);
  private readonly data = inject(DeskEvents);
  private readonly picture = inject(DeskPicture);
  /** Where the slider stood last that was not at rest. */
  private readonly sliderC = linkedSignal<number, number>({
    source: () => this.place.address().speedC,
    computation: (speedC, before) => (speedC === 0 ? (before?.value ?? 0) : speedC),
  });

  /** The slider's frame by the site that it moves toward, at a speed that is positive. */
  private readonly slid = computed(() => {
    const speedC = this.sliderC();
    const [origin, other] = [this.picture.origin(), this.picture.other()];
    if (this.picture.view() !== 'baseline' || speedC === 0 || !origin || !other || origin.site === other.site) return undefined;
    const [from, to] = speedC > 0 ? [origin.site, other.site] : [other.site, origin.site];
    return { from, to, speedC: Math.abs(speedC), words: `toward ${to} at ${withUnit(Math.abs(speedC).toFixed(3), 'c')}` };
  });

  readonly offered = computed<FramesOffered>(() => {
    const { speedC } = this.place.address();
    const isAlong = this.picture.view() === 'baseline';
    const said = isAlong ? this.place.address().frame : undefined;
    const all = this.data.frames.value() ?? [];
    const shown = all.find(({ code }) => code === said)?.code;
    const frames = [...all].sort((a, b) => (a.pinned ?? Infinity) - (b.pinned ?? Infinity) || a.id - b.id);
    const along = new Map(this.picture.framesAlong().map(({ code, velocityC }) => [code, velocityC]));
    const isSlid = isAlong && shown === undefined && speedC !== 0;
    const slid = this.slid();
    const options: FrameOption[] = [
      {
        ...{ code: GEOCENTRIC, words: 'at rest', velocityC: 0, isShown: !isSlid && shown === undefined },
        choose: () => this.place.go({ speedC: 0, frame: undefined }),
      },
      ...frames
        .filter(({ resolved }) => resolved !== null)
        .map(({ code, name, pinned, resolved }) => ({
          code,
          words: `${name}${pinned === null ? ', not pinned' : ''}`,
          velocityC: (isAlong ? along.get(code) : undefined) ?? resolved?.speedC ?? 0,
          isShown: shown === code,
          choose: () => this.choose(code),
        })),
      ...(slid
        ? [
            {
              ...{ code: 'Slider', words: slid.words, velocityC: this.sliderC(), isShown: isSlid },
              choose: () => this.place.go({ speedC: this.sliderC(), frame: undefined }),
            },
          ]
        : []),
    ];
    return {
      shown: shown ?? (isSlid ? (slid?.words ?? withUnit(speedC.toFixed(3), 'c')) : GEOCENTRIC),
      velocityC: isAlong ? this.picture.speedC() : 0,
      options,
      pin: isSlid && slid && this.session.may('frame:make') ? () => this.pin(slid) : undefined,
    };
  });

  /** The same from the keyboard, and where the window has no room for the chip. */
  commands(): readonly Command[] {
    const { options, pin } = this.offered();
    const section = 'This page';
    return [
      ...options
        .filter(({ isShown }) => !isShown)
        .map(({ code, words, choose }) => ({ title: `Show in the frame ${code}, ${words}`, section, run: choose }) as const),
      ...(pin ? [{ title: 'Pin this frame', section, run: pin } as const] : []),
    ];
  }

  /** Sets the desk along a baseline, the one view that shows a frame which moves. */
  private choose(frame: string): void {
    const isThere = this.picture.view() === 'baseline';
    const sight = { spanMs: undefined, topMs: undefined, leftMs: undefined, until: undefined };
    this.place.go({ view: 'baseline', frame, speedC: 0, ...(!isThere && sight) });
  }

  private async pin({ from, to, speedC, words }: { from: string; to: string; speedC: number; words: string }): Promise<void> {
    const siteId = (code: string): number => this.data.sites().find((site) => site.code === code)?.id ?? 0;
    const motion: FrameMotionStated = { kind: 'toward-baseline', speedC, fromSiteId: siteId(from), toSiteId: siteId(to) };
    const frames = this.data.frames.value() ?? [];
    const base = `to-${to.slice(0, MOST_OF_CODE)}-${Math.round(speedC * 1e3)}`;
    const pinned = Math.max(0, ...frames.map((frame) => frame.pinned ?? 0)) + 1;
    const body = { name: `From ${from} ${words}`, pinned, at: 'event' as const, motion };
    try {
      const made = await this.make(base, body);
      await this.data.frames.load();
      this.toasts.say(`Frame ${made.code} pinned.`, () => this.close(made));
    } catch (fault) {
      this.toasts.fail(sentenceOf(fault));
    }
  }

  /** Under the first code that is free: one that was taken back stays taken. */
  private async make(base: string, body: { name: string; pinned: number; at: 'event'; motion: FrameMotionStated }) {
    const params = { networkId: this.networks.network()?.id ?? 0 };
    for (let tried = 1; ; tried++) {
      const code = tried === 1 ? base : `${base}-${tried}`;
      try {
        return await this.api.call(FRAME_ROUTES.makeFrame, { params, body: { code, ...body } });
      } catch (fault) {
        if (!(fault instanceof ApiProblem) || fault.where !== 'code' || tried === MOST_TRIES) throw fault;
      }
    }
  }

  private async close({ id, code, version }: { id: number; code: string; version: number }): Promise<void> {
    try {
      await this.api.call(FRAME_ROUTES.closeFrame, { params: { frameId: id }, body: { version } });
      if (this.place.address().frame === code) this.place.go({ frame: undefined });
      await this.data.frames.load();
      this.toasts.say(`Frame ${code} closed.`);
    } catch (fault) {
      this.toasts.fail(sentenceOf(fault));
    }
  }
}
