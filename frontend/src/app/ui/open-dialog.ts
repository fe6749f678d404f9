import { type ComponentType } from '@angular/cdk/portal';
import { Dialog, DialogConfig, type DialogRef } from '@angular/cdk/dialog';
import { inject, Injectable } from '@angular/core';
import { firstValueFrom } from 'rxjs';

/** Opens a dialog over the page. What it is called is told to who hears it. */
@Injectable({ providedIn: 'root' })
export class OpenDialog {
  private readonly dialog = inject(Dialog);

  /** Whether one is open. */
  get isOpen(): boolean {
    return this.dialog.openDialogs.length > 0;
  }

  /**
   * Opens it and waits until it is closed.
   *
   * @param component what it shows
   * @param options as the CDK's dialog takes them
   * @returns what it was closed with; undefined when it was left
   */
  open<Result, Data = unknown>(
    component: ComponentType<unknown>,
    options: Partial<DialogConfig<Data, DialogRef<Result>>>,
  ): Promise<Result | undefined> {
    const config = Object.assign(new DialogConfig<Data, DialogRef<Result>>(), options);
    return firstValueFrom(this.dialog.open<Result, Data>(component, config).closed);
  }
}
