import { ChangeDetectionStrategy, Component, inject, Injectable, signal } from '@angular/core';
import { Icon } from './icon';

/** How long an act can be undone, and how long a word about one stands. */
export const UNDO_MS = 10_000;
const MOST_TOASTS = 3;

interface Toast {
  readonly id: number;
  readonly text: string;
  readonly fault: boolean;
  readonly undo: (() => unknown) | undefined;
}

/** Short words about what was just done. */
@Injectable({ providedIn: 'root' })
export class ToastStore {
  private readonly shown = signal<readonly Toast[]>([]);
  private lastId = 0;
  readonly toasts = this.shown.asReadonly();

  /** Repeats an act that is done; with `undo`, for as long as it can be taken back. */
  say(text: string, undo?: () => unknown): void {
    this.add({ text, fault: false, undo });
  }

  /** Says that an act failed, until it is closed; returns by which id. */
  fail(text: string): number {
    return this.add({ text, fault: true, undo: undefined });
  }

  close(id: number): void {
    this.shown.update((all) => all.filter((one) => one.id !== id));
  }

  private add(toast: Omit<Toast, 'id'>): number {
    const id = ++this.lastId;
    this.shown.update((all) => [...all.slice(1 - MOST_TOASTS), { ...toast, id }]);
    if (!toast.fault) setTimeout(() => this.close(id), UNDO_MS);
    return id;
  }
}

/** Where the words about what was just done stand. */
@Component({
  selector: 'sw-toasts',
  imports: [Icon],
  changeDetection: ChangeDetectionStrategy.OnPush,
  template: `
    <div class="live" role="status">
      @for (toast of store.toasts(); track toast.id) {
        <div class="toast" [class.fault]="toast.fault">
          @if (toast.fault) {
            <sw-icon name="error" />
          }
          <p>{{ toast.text }}</p>
          @if (toast.undo) {
            <button class="link" type="button" (click)="undo(toast.id, toast.undo)">Undo</button>
          }
          <button class="quiet" type="button" aria-label="Close" (click)="store.close(toast.id)"><sw-icon name="close" /></button>
        </div>
      }
    </div>
  `,
  styleUrl: './toasts.scss',
})
export class Toasts {
  protected readonly store = inject(ToastStore);

  protected undo(id: number, undo: () => unknown): void {
    this.store.close(id);
    undo();
  }
}
