import { ChangeDetectionStrategy, Component, computed, inject, input, linkedSignal, type OnInit, output, signal } from '@angular/core';
import { FormArray, FormControl, FormGroup, ReactiveFormsModule } from '@angular/forms';
import { type Frame, FRAME_ROUTES } from '#shared/contract/frame-routes';
import { code, numberThat } from '#shared/contract/leaves';
import { type Rule, RULE_ROUTES, type RuleWindowGiven } from '#shared/contract/rule-routes';
import { between, nameOrEmpty, setupNote, timeGiven, type Warning, wholeNumber } from '#shared/contract/setup-leaves';
import { allOf } from '../api/all-of';
import { ApiClient } from '../api/api-client';
import { typedInstant } from '../instants/typed-instant';
import { NetworkStore } from '../networks/network-store';
import { Preferences } from '../preferences/preferences';
import { Term } from '../terms/term';
import { numberControl, numberOrEmpty, textControl } from '../ui/controls';
import { Field } from '../ui/field';
import { Icon } from '../ui/icon';
import { Meanwhile } from '../ui/meanwhile';
import { MeanwhileNote } from '../ui/meanwhile-note';
import { numberIn } from '../ui/number-typed';
import { Segmented } from '../ui/segmented';
import { Sending } from '../ui/sending';
import { ruleWords } from './rule-words';

/** A rule that was stated, and what is doubtful about it. */
export interface RuleTold {
  readonly rule: Rule;
  readonly warnings: readonly Warning[];
}

type Exclusion = Rule['now']['exclusions'][number];

/** The form that states a coincidence rule, or changes what one says. */
@Component({
  selector: 'sw-rule-form',
  imports: [Field, Icon, MeanwhileNote, ReactiveFormsModule, Segmented, Term],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './rule-form.html',
  styleUrl: './rule-form.scss',
})
export class RuleForm implements OnInit {
  private readonly api = inject(ApiClient);
  private readonly preferences = inject(Preferences);
  protected readonly networks = inject(NetworkStore);
  readonly networkId = input.required<number>();
  /** The rule that is changed; none for a new one. */
  readonly rule = input<Rule | undefined>();
  readonly told = output<RuleTold>();
  readonly closed = output();

  private readonly seen = linkedSignal(() => this.rule());
  protected readonly heading = computed(() => (this.rule() ? `Change ${this.rule()?.code}` : 'State a rule'));
  protected readonly kinds = [
    { value: 'light-time', word: 'Light-time and error' },
    { value: 'fixed', word: 'A fixed width' },
  ] as const;
  protected readonly kind = signal<'light-time' | 'fixed'>('light-time');
  protected readonly frames = signal<readonly Frame[]>([]);
  /** The sites that it is for; none for all. */
  protected readonly siteIds = signal<ReadonlySet<number>>(new Set());
  protected readonly form = new FormGroup({
    code: textControl(code()),
    name: textControl(nameOrEmpty()),
    speedC: numberControl(between(1e-3, 1e6, 'c'), '1'),
    marginNs: numberControl(between(0, 1e11, 'nanoseconds'), '0'),
    widthNs: numberControl(between(0, 1e11, 'nanoseconds'), '50000000'),
    frameId: new FormControl<number | null>(null),
    minimumFold: numberControl(wholeNumber(2, 200), '2'),
    sigmas: numberControl(between(0, 100, 'standard errors'), '3'),
    leastAmplitude: numberOrEmpty(numberThat('a number, or nothing')),
    deadTimeNs: numberControl(between(0, 8.64e13, 'nanoseconds'), '0'),
    crowdLimit: numberControl(wholeNumber(1, 10_000), '10000'),
    exclusions: new FormArray<ReturnType<typeof exclusionForm>>([]),
  });
  protected readonly sending = new Sending(this.form);
  protected readonly meanwhile = new Meanwhile<Rule>(
    () => this.api.call(RULE_ROUTES.readRule, { params: { ruleId: this.rule()?.id ?? 0 } }),
    (rule) => ruleWords(rule, this.preferences.scale(), (id) => this.networks.sites.value()?.find((site) => site.id === id)?.code ?? String(id)), // prettier-ignore
  );

  ngOnInit(): void {
    const rule = this.rule();
    if (rule) this.fill(rule);
    const params = { networkId: this.networkId() };
    void allOf((query) => this.api.call(FRAME_ROUTES.listFrames, { params, query }))
      .catch(() => [])
      .then((frames) => this.frames.set(frames));
  }

  private fill({ code: given, name, now }: Rule): void {
    const { window } = now;
    this.kind.set(window.kind);
    this.siteIds.set(new Set(now.siteIds));
    for (const exclusion of now.exclusions) this.form.controls.exclusions.push(this.exclusionOf(exclusion));
    this.form.patchValue({
      code: given,
      name,
      minimumFold: String(now.minimumFold),
      sigmas: String(now.sigmas),
      leastAmplitude: now.leastAmplitude === null ? '' : String(now.leastAmplitude),
      deadTimeNs: String(now.deadTimeNs),
      crowdLimit: String(now.crowdLimit),
      ...(window.kind === 'fixed'
        ? { widthNs: String(window.widthNs), frameId: window.frameId }
        : { speedC: String(window.speedC), marginNs: String(window.marginNs) }),
    });
  }

  private exclusionOf({ siteId, from, to, reason }: Exclusion) {
    const scale = this.preferences.scale();
    return exclusionForm(siteId, typedInstant(from, scale), typedInstant(to, scale), reason);
  }

  protected leaveOut(): void {
    this.form.controls.exclusions.push(exclusionForm(null, '', '', ''));
  }

  protected toggle(siteId: number): void {
    this.siteIds.update((now) => (now.has(siteId) ? new Set([...now].filter((id) => id !== siteId)) : new Set([...now, siteId])));
  }

  protected send(): Promise<boolean> {
    const seen = this.seen();
    return this.sending.send(async () => {
      const { warnings, ...rule } = seen
        ? await this.meanwhile.around(seen, () => this.change(seen), (fresh) => this.seen.set(fresh)) // prettier-ignore
        : await this.make();
      this.told.emit({ rule, warnings });
    });
  }

  private make() {
    const { code: given, name } = this.form.getRawValue();
    return this.api.call(RULE_ROUTES.makeRule, { params: { networkId: this.networkId() }, body: { code: given, name, state: this.state() } }); // prettier-ignore
  }

  private change({ id, version }: Rule) {
    const { name } = this.form.getRawValue();
    return this.api.call(RULE_ROUTES.changeRule, { params: { ruleId: id }, body: { name, state: this.state(), version } });
  }

  private state() {
    const given = this.form.getRawValue();
    return {
      window: this.window(),
      minimumFold: numberIn(given.minimumFold),
      sigmas: numberIn(given.sigmas),
      leastAmplitude: given.leastAmplitude.trim() === '' ? null : numberIn(given.leastAmplitude),
      deadTimeNs: numberIn(given.deadTimeNs),
      crowdLimit: numberIn(given.crowdLimit),
      siteIds: [...this.siteIds()],
      exclusions: given.exclusions,
    };
  }

  private window(): RuleWindowGiven {
    const { speedC, marginNs, widthNs, frameId } = this.form.getRawValue();
    if (this.kind() === 'fixed') return { kind: 'fixed', widthNs: numberIn(widthNs), frameId };
    return { kind: 'light-time', speedC: numberIn(speedC), marginNs: numberIn(marginNs) };
  }
}

const typedTime = (text: string) => textControl(timeGiven().refine((given) => given !== '', 'a time such as 2027-03-01T00:00:00 UTC'), text); // prettier-ignore

/** A period that a rule leaves out, at one site or at all. */
const exclusionForm = (siteId: number | null, from: string, to: string, reason: string) =>
  new FormGroup({
    siteId: new FormControl<number | null>(siteId),
    from: typedTime(from),
    to: typedTime(to),
    reason: textControl(setupNote(), reason),
  });
