import { ChangeDetectionStrategy, Component, effect, inject, input, output, signal } from '@angular/core';
import { FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { type Frame, FRAME_ROUTES, type FrameMotionStated } from '#shared/contract/frame-routes';
import { code, numberThat } from '#shared/contract/leaves';
import { between, nameOrEmpty } from '#shared/contract/setup-leaves';
import { ApiClient } from '../api/api-client';
import { NetworkStore } from '../networks/network-store';
import { Field } from '../ui/field';
import { numberIn, numberTyped } from '../ui/number-typed';
import { Segmented } from '../ui/segmented';
import { Sending } from '../ui/sending';
import { zodValidator } from '../ui/zod-validator';

type Kind = FrameMotionStated['kind'];

/** The form that composes a frame in the geocentric one: toward a place in the sky, or from one site toward another. */
@Component({
  selector: 'sw-make-frame',
  imports: [Field, ReactiveFormsModule, Segmented],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './make-frame.html',
})
export class MakeFrame {
  private readonly api = inject(ApiClient);
  protected readonly networks = inject(NetworkStore);
  readonly networkId = input.required<number>();
  readonly made = output<Frame>();
  protected readonly kinds = [
    { value: 'velocity', word: 'In the sky' },
    { value: 'toward-baseline', word: 'Along a baseline' },
    { value: 'barycentric', word: 'Barycentric' },
  ] as const;
  protected readonly kind = signal<Kind>('velocity');
  protected readonly form = new FormGroup({
    code: new FormControl('', { nonNullable: true, validators: zodValidator(code()) }),
    name: new FormControl('', { nonNullable: true, validators: zodValidator(nameOrEmpty()) }),
    speedC: new FormControl('0.5', {
      nonNullable: true,
      validators: zodValidator(numberThat('a speed in c, 0 or more and below 1', (value) => value >= 0 && value < 1), numberTyped), // prettier-ignore
    }),
    raDeg: new FormControl('0', { nonNullable: true, validators: zodValidator(between(-360, 360, 'degrees'), numberTyped) }),
    decDeg: new FormControl('0', { nonNullable: true, validators: zodValidator(between(-90, 90, 'degrees'), numberTyped) }),
    fromSiteId: new FormControl(0, { nonNullable: true }),
    toSiteId: new FormControl(0, { nonNullable: true }),
  });
  protected readonly sending = new Sending(this.form);

  constructor() {
    effect(() => {
      const [first, second] = this.networks.sites.value() ?? [];
      const { fromSiteId, toSiteId } = this.form.controls;
      if (first && fromSiteId.value === 0) fromSiteId.setValue(first.id);
      if (second && toSiteId.value === 0) toSiteId.setValue(second.id);
    });
  }

  protected make(): Promise<boolean> {
    const { code: given, name } = this.form.getRawValue();
    return this.sending.send(async () => {
      const frame = await this.api.call(FRAME_ROUTES.makeFrame, {
        params: { networkId: this.networkId() },
        body: { code: given, name, motion: this.motion() },
      });
      this.made.emit(frame);
    });
  }

  private motion(): FrameMotionStated {
    const { speedC, raDeg, decDeg, fromSiteId, toSiteId } = this.form.getRawValue();
    const kind = this.kind();
    switch (kind) {
      case 'barycentric':
        return { kind };
      case 'velocity':
        return { kind, speedC: numberIn(speedC), toward: { raDeg: numberIn(raDeg), decDeg: numberIn(decDeg) } };
      case 'toward-baseline':
        return { kind, speedC: numberIn(speedC), fromSiteId, toSiteId };
    }
  }
}
