import { ChangeDetectionStrategy, Component, type ElementRef, viewChild } from '@angular/core';
import { RouterOutlet } from '@angular/router';

/** What every page stands in: the way past what repeats, and the page itself. */
@Component({
  selector: 'sw-root',
  imports: [RouterOutlet],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <a class="skip" href="#main" (click)="skip($event)">Skip to the content</a>
    <div #page><router-outlet /></div>
  `,
  styleUrl: './app.scss',
})
export class App {
  private readonly page = viewChild.required<ElementRef<HTMLElement>>('page');

  /** The address of the link would lead away from the page, since the base is the root. */
  protected skip(event: Event): void {
    event.preventDefault();
    this.page().nativeElement.querySelector<HTMLElement>('main')?.focus();
  }
}
