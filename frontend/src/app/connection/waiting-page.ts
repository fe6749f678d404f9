import { effect, inject, Injectable, untracked } from '@angular/core';
import { takeUntilDestroyed } from '@angular/core/rxjs-interop';
import { type ActivatedRouteSnapshot, NavigationEnd, NavigationError, NavigationStart, Router } from '@angular/router';
import { ToastStore } from '../ui/toasts';
import { ConnectionStore } from './connection-store';

/**
 * A page that was gone to while its part of the application could not be fetched: it is said, and the page opens by itself once the server is
 * back, unless another was gone to meanwhile.
 */
@Injectable({ providedIn: 'root' })
export class WaitingPage {
  private readonly router = inject(Router);
  private readonly connection = inject(ConnectionStore);
  private readonly toasts = inject(ToastStore);
  private url: string | undefined;
  private toastId: number | undefined;

  constructor() {
    this.router.events.pipe(takeUntilDestroyed()).subscribe((event) => {
      if (event instanceof NavigationStart || event instanceof NavigationEnd) this.forget();
      else if (event instanceof NavigationError) void this.failed(event);
    });
    effect(() => {
      const isThere = !this.connection.offline();
      untracked(() => {
        // That it failed again is heard as any failure.
        if (isThere && this.url !== undefined) this.router.navigateByUrl(this.url).catch(() => undefined);
      });
    });
  }

  private async failed({ url, target }: NavigationError): Promise<void> {
    const name = (target && titleOf(target.root)) ?? 'The page';
    this.url = url;
    await this.connection.ask();
    // Another was gone to while the server was asked.
    if (this.url !== url) return;
    if (this.connection.offline()) {
      this.toastId = this.toasts.fail(`\u201c${name}\u201d cannot be loaded while the server is away. It opens once the server is back.`);
      return;
    }
    this.url = undefined;
    this.toastId = this.toasts.fail(`\u201c${name}\u201d could not be loaded, though the server answers. Load this window anew.`);
  }

  private forget(): void {
    this.url = undefined;
    if (this.toastId !== undefined) this.toasts.close(this.toastId);
    this.toastId = undefined;
  }
}

/** The title of the innermost page. */
function titleOf(route: ActivatedRouteSnapshot): string | undefined {
  const own = route.routeConfig?.title;
  return (route.firstChild && titleOf(route.firstChild)) ?? (typeof own === 'string' ? own : undefined);
}
