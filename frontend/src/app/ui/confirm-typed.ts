import { DIALOG_DATA, DialogRef } from '@angular/cdk/dialog';
import { ChangeDetectionStrategy, Component, inject, Injectable, signal } from '@angular/core';
import { OpenDialog } from './open-dialog';

interface Question {
  readonly heading: string;
  /** What will be gone, and that it cannot be taken back. */
  readonly text: string;
  /** What must be typed. */
  readonly word: string;
  /** The act, as the button says it. */
  readonly act: string;
}

/** Asks before what cannot be undone: only who types the word means it. */
@Injectable({ providedIn: 'root' })
export class ConfirmTyped {
  private readonly dialog = inject(OpenDialog);

  async ask(question: Question): Promise<boolean> {
    const options = { data: question, ariaLabelledBy: 'typed-heading', ariaDescribedBy: 'typed-text' };
    return (await this.dialog.open<boolean, Question>(TypedQuestion, options)) ?? false;
  }
}

@Component({
  selector: 'sw-typed-question',
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <form class="dialog" (submit)="decide($event)">
      <h2 id="typed-heading">{{ question.heading }}</h2>
      <p id="typed-text">{{ question.text }}</p>
      <label for="typed-word">
        Type <strong class="figure">{{ question.word }}</strong> to go on
      </label>
      <input #box id="typed-word" class="box" autocomplete="off" (input)="typed.set(box.value)" />
      <div class="acts">
        <button class="btn primary" type="submit" [disabled]="typed() !== question.word">{{ question.act }}</button>
        <button class="btn plain" type="button" (click)="ref.close(false)">Cancel</button>
      </div>
    </form>
  `,
})
class TypedQuestion {
  protected readonly question = inject<Question>(DIALOG_DATA);
  protected readonly ref = inject<DialogRef<boolean>>(DialogRef);
  protected readonly typed = signal('');

  protected decide(event: Event): void {
    event.preventDefault();
    if (this.typed() === this.question.word) this.ref.close(true);
  }
}
