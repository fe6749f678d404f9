import { inject, Pipe, type PipeTransform } from '@angular/core';
import { type Instant } from '#shared/time/instant';
import { Preferences } from '../preferences/preferences';
import { type InstantParts, instantParts } from './instant-parts';
import { serverInstant } from './server-instant';

/** The parts of an instant in the chosen scale. Not pure, since the choice is a signal that it reads. */
@Pipe({ name: 'swInstant', pure: false })
export class InstantPipe implements PipeTransform {
  private readonly preferences = inject(Preferences);
  private last: { readonly of: Instant | string; readonly decimals: number; readonly parts: InstantParts } | undefined;

  /** @param of an instant, or what the server's clock wrote in UTC */
  transform(of: Instant | string, decimals: number): InstantParts {
    const scale = this.preferences.scale();
    if (this.last?.of === of && this.last.decimals === decimals && this.last.parts.scale === scale) return this.last.parts;
    const parts = instantParts(typeof of === 'string' ? serverInstant(of) : of, scale, decimals);
    this.last = { of, decimals, parts };
    return parts;
  }
}
