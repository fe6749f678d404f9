import { ChangeDetectionStrategy, Component, computed, inject, input, linkedSignal, type OnInit, output, signal } from '@angular/core';
import { toSignal } from '@angular/core/rxjs-interop';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { map, startWith } from 'rxjs';
import { type Frame, FRAME_ROUTES, type FrameMotionStated } from '#shared/contract/frame-routes';
import { code, numberThat } from '#shared/contract/leaves';
import { between, nameOrEmpty } from '#shared/contract/setup-leaves';
import { ApiClient } from '../api/api-client';
import { NetworkStore } from '../networks/network-store';
import { numberControl, textControl } from '../ui/controls';
import { Field } from '../ui/field';
import { Meanwhile } from '../ui/meanwhile';
import { MeanwhileNote } from '../ui/meanwhile-note';
import { numberIn } from '../ui/number-typed';
import { Segmented } from '../ui/segmented';
import { Sending } from '../ui/sending';
import { frameWords } from './motion-words';

type Kind = FrameMotionStated['kind'] | 'parts';
const UNITS = ['speedC', 'speedKmS', 'rapidity'] as const;
type Unit = (typeof UNITS)[number];
const UNIT_WORDS: Readonly<Record<Unit, string>> = { speedC: 'c', speedKmS: 'km/s', rapidity: 'rapidity' };
const part = () => numberControl(numberThat('a number in c between -1 and 1', (value) => Math.abs(value) < 1), '0'); // prettier-ignore

/** The form that composes a frame, or states one anew: how it moves in the geocentric one, or in another of the network. */
@Component({
  selector: 'sw-frame-form',
  imports: [Field, MeanwhileNote, ReactiveFormsModule, Segmented],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './frame-form.html',
})
export class FrameForm implements OnInit {
  private readonly api = inject(ApiClient);
  protected readonly networks = inject(NetworkStore);
  readonly networkId = input.required<number>();
  /** The frames of the network, among which it can have its parent. */
  readonly frames = input.required<readonly Frame[]>();
  /** The frame that is changed; none for a new one. */
  readonly frame = input<Frame | undefined>();
  readonly told = output<Frame>();
  readonly closed = output();

  private readonly seen = linkedSignal(() => this.frame());
  protected readonly heading = computed(() => (this.frame() ? `Change ${this.frame()?.code}` : 'Compose a frame'));
  protected readonly parents = computed(() => this.frames().filter(({ id }) => id !== this.frame()?.id));
  protected readonly kinds = [
    { value: 'velocity', word: 'In the sky' },
    { value: 'toward-baseline', word: 'Along a baseline' },
    { value: 'parts', word: 'By x, y, z' },
    { value: 'barycentric', word: 'Barycentric' },
  ] as const;
  protected readonly kind = signal<Kind>('velocity');
  protected readonly units = UNITS.map((value) => ({ value, word: UNIT_WORDS[value] }));
  protected readonly form = new FormGroup({
    code: textControl(code()),
    name: textControl(nameOrEmpty()),
    parentId: new FormControl<number | null>(null),
    unit: new FormControl<Unit>('speedC', { nonNullable: true }),
    speed: numberControl(numberThat('a speed, 0 or more', (value) => value >= 0), '0.5'), // prettier-ignore
    raDeg: numberControl(between(-360, 360, 'degrees'), '0'),
    decDeg: numberControl(between(-90, 90, 'degrees'), '0'),
    fromSiteId: new FormControl(0, { nonNullable: true }),
    toSiteId: new FormControl(0, { nonNullable: true }),
    x: part(),
    y: part(),
    z: part(),
  });
  private readonly unit = toSignal(this.form.controls.unit.valueChanges.pipe(startWith(this.form.controls.unit.value), map(() => this.form.controls.unit.value))); // prettier-ignore
  protected readonly speedLabel = computed(() => {
    const unit = this.unit() ?? 'speedC';
    return unit === 'rapidity' ? 'Rapidity' : `Speed, ${UNIT_WORDS[unit]}`;
  });
  protected readonly sending = new Sending(this.form);
  protected readonly meanwhile = new Meanwhile<Frame>(
    async () => (await this.api.call(FRAME_ROUTES.readFrame, { params: { frameId: this.frame()?.id ?? 0 } })),
    (frame) =>
      frameWords(
        frame,
        (id) => this.networks.sites.value()?.find((site) => site.id === id)?.code ?? String(id),
        (id) => this.frames().find((one) => one.id === id)?.code ?? String(id),
      ),
  ); // prettier-ignore

  ngOnInit(): void {
    const [first, second] = this.networks.sites.value() ?? [];
    this.form.patchValue({ fromSiteId: first?.id ?? 0, toSiteId: second?.id ?? 0 });
    const frame = this.frame();
    if (!frame) return;
    this.form.patchValue({ code: frame.code, name: frame.name, parentId: frame.now.parentId });
    if (frame.now.motion) this.fill(frame.now.motion);
  }

  private fill(motion: FrameMotionStated): void {
    this.kind.set(motion.kind);
    if (motion.kind === 'barycentric') return;
    const unit = UNITS.find((one) => motion[one] !== undefined) ?? 'speedC';
    this.form.patchValue({ unit, speed: String(motion[unit] ?? 0) });
    if (motion.kind === 'toward-baseline') {
      this.form.patchValue({ fromSiteId: motion.fromSiteId, toSiteId: motion.toSiteId });
      return;
    }
    const { betaC, toward } = motion;
    if (toward) this.form.patchValue({ raDeg: String(toward.raDeg), decDeg: String(toward.decDeg) });
    if (!betaC) return;
    this.kind.set('parts');
    const [x, y, z] = betaC;
    this.form.patchValue({ x: String(x), y: String(y), z: String(z) });
  }

  protected send(): Promise<boolean> {
    const { code: given, name, parentId } = this.form.getRawValue();
    const stated = { name, parentId, motion: this.motion() };
    const seen = this.seen();
    return this.sending.send(async () => {
      if (!seen) {
        const params = { networkId: this.networkId() };
        this.told.emit(await this.api.call(FRAME_ROUTES.makeFrame, { params, body: { code: given, ...stated } }));
        return;
      }
      const change = () => this.api.call(FRAME_ROUTES.changeFrame, { params: { frameId: seen.id }, body: { ...stated, version: seen.version } }); // prettier-ignore
      this.told.emit(await this.meanwhile.around(seen, change, (fresh) => this.seen.set(fresh)));
    });
  }

  private motion(): FrameMotionStated {
    const { unit, speed, raDeg, decDeg, fromSiteId, toSiteId, x, y, z } = this.form.getRawValue();
    const kind = this.kind();
    const at = { [unit]: numberIn(speed) };
    switch (kind) {
      case 'barycentric':
        return { kind };
      case 'parts':
        return { kind: 'velocity', betaC: [numberIn(x), numberIn(y), numberIn(z)] };
      case 'velocity':
        return { kind, ...at, toward: { raDeg: numberIn(raDeg), decDeg: numberIn(decDeg) } };
      case 'toward-baseline':
        return { kind, ...at, fromSiteId, toSiteId };
    }
  }
}
