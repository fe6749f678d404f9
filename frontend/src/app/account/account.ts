import { ChangeDetectionStrategy, Component, inject } from '@angular/core';
import { Router } from '@angular/router';
import { SCALES } from '#shared/time/scales';
import { Preferences } from '../preferences/preferences';
import { SessionStore } from '../session/session-store';
import { Segmented } from '../ui/segmented';
import { MyMails } from './my-mails';
import { MyName } from './my-name';
import { MyPassword } from './my-password';
import { MySessions } from './my-sessions';
import { RoleWords } from '../coordinate/role-words';

/** What everyone sees and changes of their own: name, password, sessions, how things are shown to them, and their mails. */
@Component({
  selector: 'sw-account',
  imports: [MyMails, MyName, MyPassword, MySessions, RoleWords, Segmented],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './account.html',
  styleUrl: './account.scss',
})
export class Account {
  protected readonly session = inject(SessionStore);
  private readonly router = inject(Router);
  protected readonly preferences = inject(Preferences);
  protected readonly themes = [
    { value: 'system', word: 'System' },
    { value: 'light', word: 'Light' },
    { value: 'dark', word: 'Dark' },
  ] as const;
  protected readonly scales = SCALES.map((scale) => ({ value: scale, word: scale }));
  protected readonly switch = [
    { value: 'on', word: 'On' },
    { value: 'off', word: 'Off' },
  ] as const;

  /** Ends this session alone. Of a server that is not reached it is forgotten here all the same. */
  protected async signOut(): Promise<void> {
    await this.session.signOut().catch(() => undefined);
    await this.router.navigateByUrl('/sign-in');
  }
}
