import { signal } from '@angular/core';
import { type FormGroup } from '@angular/forms';
import { putFault } from './put-fault';

/** A form on its way to the server: once at a time, and what is refused said at its field or for the whole. */
export class Sending {
  private readonly running = signal(false);
  private readonly told = signal('');
  readonly busy = this.running.asReadonly();
  /** The sentence of what was refused, where it is about no field. */
  readonly fault = this.told.asReadonly();

  constructor(private readonly form: FormGroup) {}

  /** Does the act if all fields are right. @returns whether it is done */
  async send(act: () => Promise<unknown>): Promise<boolean> {
    this.form.markAllAsTouched();
    if (this.form.invalid || this.running()) return false;
    this.running.set(true);
    this.told.set('');
    try {
      await act();
      return true;
    } catch (fault) {
      this.told.set(putFault(this.form, fault));
      return false;
    } finally {
      this.running.set(false);
    }
  }
}
