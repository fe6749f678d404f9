import { ChangeDetectionStrategy, Component, type ElementRef, inject, viewChild } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { NavigationEnd, Router, RouterOutlet } from '@angular/router';
import { filter, pairwise } from 'rxjs';
import { Preferences } from './preferences/preferences';
import { Toasts } from './ui/toasts';

/** What every page stands in: the way past what repeats, the page itself, and words about what was just done. */
@Component({
  selector: 'sw-root',
  imports: [RouterOutlet, Toasts],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <a class="skip" href="#main" (click)="skip($event)">Skip to the content</a>
    <div #page><router-outlet /></div>
    <sw-toasts />
  `,
  styleUrl: './app.scss',
})
export class App {
  private readonly page = viewChild.required<ElementRef<HTMLElement>>('page');

  constructor() {
    inject(Preferences); // the theme follows them from the start
    inject(Router)
      .events.pipe(
        filter((event) => event instanceof NavigationEnd),
        pairwise(),
        filter(([before, now]) => pathOf(before) !== pathOf(now)),
        takeUntilDestroyed(),
      )
      .subscribe(() => setTimeout(() => this.toContent()));
  }

  /** The address of the link would lead away from the page, since the base is the root. */
  protected skip(event: Event): void {
    event.preventDefault();
    this.toContent();
  }

  /** Where a page that was gone to begins, for the keyboard and for who hears the page. */
  private toContent(): void {
    this.page().nativeElement.querySelector<HTMLElement>('main')?.focus({ preventScroll: true });
  }
}

const pathOf = ({ urlAfterRedirects }: NavigationEnd): string | undefined => urlAfterRedirects.split(/[?#]/, 1)[0];
