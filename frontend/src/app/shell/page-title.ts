import { inject, Injectable } from '@angular/core';
import { Title } from '@angular/platform-browser';
import { type RouterStateSnapshot, TitleStrategy } from '@angular/router';

/** The title of the window: the page's own words first, then the product. */
@Injectable({ providedIn: 'root' })
export class PageTitle extends TitleStrategy {
  private readonly title = inject(Title);

  override updateTitle(state: RouterStateSnapshot): void {
    this.set(this.buildTitle(state));
  }

  /** For a page that knows its title only once it has loaded what it shows. */
  set(words: string | undefined): void {
    this.title.setTitle(words === undefined ? 'Skewline' : `${words}: Skewline`);
  }
}
