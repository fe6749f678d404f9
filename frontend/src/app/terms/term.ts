import { LiveAnnouncer } from '@angular/cdk/a11y';
import { CdkConnectedOverlay, CdkOverlayOrigin } from '@angular/cdk/overlay';
import { ChangeDetectionStrategy, Component, computed, inject, input, signal } from '@angular/core';
import { type TermName, TERMS } from './terms';

/** A `?` beside a word, which opens what it means. */
@Component({
  selector: 'sw-term',
  imports: [CdkConnectedOverlay, CdkOverlayOrigin],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <button
      cdkOverlayOrigin
      #origin="cdkOverlayOrigin"
      type="button"
      [attr.aria-label]="'What is meant by ' + of()"
      [attr.aria-expanded]="isOpen()"
      (click)="toggle()"
      (keydown.escape)="isOpen.set(false)"
    >
      ?
    </button>
    <ng-template
      cdkConnectedOverlay
      [cdkConnectedOverlayOrigin]="origin"
      [cdkConnectedOverlayOpen]="isOpen()"
      [cdkConnectedOverlayViewportMargin]="10"
      [cdkConnectedOverlayPush]="true"
      (overlayOutsideClick)="outside($event, origin)"
      (detach)="isOpen.set(false)"
    >
      <p class="definition" role="note">
        <strong>{{ of() }}</strong> {{ meaning() }}
      </p>
    </ng-template>
  `,
  styleUrl: './term.scss',
})
export class Term {
  private readonly announcer = inject(LiveAnnouncer);
  readonly of = input.required<TermName>();
  protected readonly isOpen = signal(false);
  protected readonly meaning = computed(() => TERMS[this.of()]);

  /** What opens elsewhere in the document is also spoken. */
  protected toggle(): void {
    this.isOpen.update((open) => !open);
    if (this.isOpen()) void this.announcer.announce(`${this.of()}: ${this.meaning()}`);
  }

  protected outside(event: MouseEvent, { elementRef }: CdkOverlayOrigin): void {
    const { target } = event;
    const host: unknown = elementRef.nativeElement;
    if (!(host instanceof Element && target instanceof Node && host.contains(target))) this.isOpen.set(false);
  }
}
