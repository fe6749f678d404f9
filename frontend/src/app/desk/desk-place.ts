import { inject, Injectable, signal } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { ActivatedRoute, Router } from '@angular/router';
import { type DeskAddress, readDeskAddress, writeDeskAddress } from './desk-address';

const WRITE_AFTER_MS = 250;

/** What the address says of the desk. A drag changes it at once and is written when it rests, in the place of what stood there. */
@Injectable()
export class DeskPlace {
  private readonly router = inject(Router);
  private readonly route = inject(ActivatedRoute);
  private readonly now = signal<DeskAddress>(readDeskAddress((name) => this.route.snapshot.queryParamMap.get(name)));
  private timer: ReturnType<typeof setTimeout> | undefined;
  readonly address = this.now.asReadonly();

  constructor() {
    this.route.queryParamMap.pipe(takeUntilDestroyed()).subscribe((params) => {
      if (this.timer === undefined) this.now.set(readDeskAddress((name) => params.get(name)));
    });
  }

  /** Goes to another view, so that Back comes from there to what is now. A field that is undefined is as usual. */
  go(change: Change): void {
    this.write(this.changed(change), false);
  }

  /** The same view, moved: Back does not come here. */
  move(change: Change): void {
    this.now.set(this.changed(change));
    clearTimeout(this.timer);
    this.timer = setTimeout(() => this.write(this.now(), true), WRITE_AFTER_MS);
  }

  private write(address: DeskAddress, replaceUrl: boolean): void {
    clearTimeout(this.timer);
    this.timer = undefined;
    this.now.set(address);
    void this.router.navigate([], {
      relativeTo: this.route,
      queryParams: writeDeskAddress(address),
      queryParamsHandling: 'merge',
      replaceUrl,
    });
  }

  private changed(change: Change): DeskAddress {
    const fields: Readonly<Record<string, unknown>> = { ...this.now(), ...change };
    return readDeskAddress((name) => {
      const text = writeDeskAddress(fields as unknown as DeskAddress)[name];
      return text ?? null;
    });
  }
}

export type Change = { readonly [K in keyof DeskAddress]?: DeskAddress[K] | undefined };
