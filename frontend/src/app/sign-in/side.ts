import { ChangeDetectionStrategy, Component } from '@angular/core';
import { RouterLink } from '@angular/router';
import { TurningPicture } from '../diagrams/turning-picture';
import { Wordmark } from '../ui/wordmark';

/** What stands around the pages before someone is signed in: the picture on one side, the form on the other, the limits below it. */
@Component({
  selector: 'sw-side',
  imports: [RouterLink, TurningPicture, Wordmark],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <div class="picture">
      <header>
        <sw-wordmark />
        <p>Some orders depend on the frame.</p>
      </header>
      <sw-turning-picture />
    </div>
    <div class="form">
      <main id="main" tabindex="-1"><ng-content /></main>
      <footer>
        <p>
          Frames are those of special relativity. Not for navigation, aviation or safety-of-life timing.
          <a routerLink="/about">What Skewline is, and all limits</a>
        </p>
      </footer>
    </div>
  `,
  styleUrl: './side.scss',
})
export class Side {}
