import { ChangeDetectionStrategy, Component } from '@angular/core';
import { RouterLink } from '@angular/router';
import { LIMITS } from '#shared/limits';
import { TurningPicture } from '../diagrams/turning-picture';
import { HealthPanel } from '../health/health-panel';
import { IntervalMark } from '../ui/interval-mark';
import { Wordmark } from '../ui/wordmark';

/** What Skewline is, where its numbers end, and whether this server's database answers. */
@Component({
  selector: 'sw-about',
  imports: [HealthPanel, IntervalMark, RouterLink, TurningPicture, Wordmark],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './about.html',
  styleUrl: './about.scss',
})
export class About {
  protected readonly limits = LIMITS;
}
