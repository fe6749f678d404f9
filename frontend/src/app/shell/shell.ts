import { ChangeDetectionStrategy, Component, computed, inject } from '@angular/core';
import { Router, RouterLink, RouterLinkActive, RouterOutlet } from '@angular/router';
import { type Theme } from '#shared/contract/preference-routes';
import { type Command, CommandStore } from '../commands/command-store';
import { Keys } from '../commands/keys';
import { Palette } from '../commands/palette';
import { ShortcutList } from '../commands/shortcut-list';
import { siteCommands } from '../commands/site-commands';
import { ConnectionStore } from '../connection/connection-store';
import { OfflineBanner } from '../connection/offline-banner';
import { WaitingPage } from '../connection/waiting-page';
import { LiveStore } from '../live/live-store';
import { MyPreferences } from '../preferences/my-preferences';
import { Preferences } from '../preferences/preferences';
import { NetworkStore } from '../networks/network-store';
import { AskPassword } from '../session/ask-password';
import { SessionStore } from '../session/session-store';
import { TableWarnings } from '../tables/table-warnings';
import { Icon } from '../ui/icon';
import { OpenDialog } from '../ui/open-dialog';
import { Wordmark } from '../ui/wordmark';
import { ConnectionMark } from './connection-mark';
import { FrameChip } from './frame-chip';
import { FIRST_STEPS, type Place, PLACES } from './navigation';
import { NetworkChooser } from './network-chooser';

const IN_BOTTOM_BAR = 4;
const SITES_NEEDED = 2; // for a pair
const THEME_WORDS: Readonly<Record<Theme, string>> = { system: 'as the system', light: 'light', dark: 'dark' };

/** The frame of the application around every page of who is signed in: top bar, rail or bottom bar, palette and keys. */
@Component({
  selector: 'sw-shell',
  imports: [
    ConnectionMark,
    FrameChip,
    Icon,
    NetworkChooser,
    OfflineBanner,
    RouterLink,
    RouterLinkActive,
    RouterOutlet,
    TableWarnings,
    Wordmark,
  ],
  changeDetection: ChangeDetectionStrategy.OnPush,
  templateUrl: './shell.html',
  styleUrl: './shell.scss',
  host: { '(document:keydown)': 'onKey($event)' },
})
export class Shell {
  private readonly dialog = inject(OpenDialog);
  private readonly router = inject(Router);
  private readonly keys = inject(Keys);
  protected readonly session = inject(SessionStore);
  protected readonly preferences = inject(Preferences);

  private readonly networks = inject(NetworkStore);
  /** Whether the deployment still lacks what its coordinator was led to make. */
  private readonly isEmpty = computed(
    () => this.session.coordinatesAll() && (this.networks.sites.value()?.length ?? SITES_NEEDED) < SITES_NEEDED,
  );
  protected readonly places = computed(() => [
    ...(this.isEmpty() ? [FIRST_STEPS] : []),
    ...inOrder(
      PLACES.filter(({ policy }) => policy === undefined || this.session.may(policy)),
      this.session.may('coincidence:list'),
    ),
  ]);
  protected readonly inBar = computed(() => this.places().slice(0, IN_BOTTOM_BAR));

  constructor() {
    inject(AskPassword).whenSessionEnds();
    inject(ConnectionStore).watch();
    inject(WaitingPage); // says and opens from here on what could not be fetched
    inject(LiveStore); // follows the network from here on
    inject(MyPreferences); // follow the person from here on
    inject(CommandStore).offer(() => this.commands());
  }

  protected onKey(event: KeyboardEvent): void {
    if ((event.ctrlKey || event.metaKey) && event.key.toLowerCase() === 'k') {
      event.preventDefault();
      this.openPalette();
      return;
    }
    const command = this.keys.pressed(event);
    if (!command) return;
    event.preventDefault();
    command.run();
  }

  protected openPalette(): void {
    if (this.dialog.isOpen) return;
    void this.dialog.open(Palette, { ariaLabel: 'Find a page, site or command', panelClass: 'high-pane', autoFocus: 'input' });
  }

  protected openShortcuts(): void {
    if (this.dialog.isOpen) return;
    void this.dialog.open(ShortcutList, { ariaLabelledBy: 'shortcuts-heading', autoFocus: 'first-tabbable' });
  }

  protected async signOut(): Promise<void> {
    await this.session.signOut().catch(() => undefined);
    await this.router.navigateByUrl('/sign-in');
  }

  private commands(): readonly Command[] {
    const scale = this.preferences.scale();
    const next = this.preferences.theme() === 'dark' ? 'light' : this.preferences.theme() === 'light' ? 'system' : 'dark';
    return [
      ...this.places().map(({ path, name, icon, key }): Command => ({
        title: name,
        section: 'Go to',
        icon,
        key,
        run: () => this.router.navigateByUrl(path),
      })),
      { title: 'Your account', section: 'Go to', icon: 'person', key: 'g a', run: () => this.router.navigateByUrl('/account') },
      { title: 'About Skewline, and its limits', section: 'Go to', icon: 'info', run: () => this.router.navigateByUrl('/about') },
      {
        title: `Print instants in the next scale (now ${scale})`,
        section: 'Everywhere',
        icon: 'schedule',
        key: 't',
        run: () => this.preferences.nextScale(),
      },
      {
        title: `Show colours ${THEME_WORDS[next]}`,
        section: 'Everywhere',
        icon: 'contrast',
        key: 'c',
        run: () => this.preferences.theme.set(next),
      },
      { title: 'List all shortcuts', section: 'Everywhere', icon: 'keyboard-command-key', key: '?', run: () => this.openShortcuts() },
      { title: 'Sign out', section: 'Everywhere', icon: 'logout', run: () => this.signOut() },
      ...(this.session.may('site:read') ? siteCommands(this.networks.sites.value() ?? [], (path) => this.router.navigateByUrl(path)) : []),
    ];
  }
}

/** Who sees no coincidences runs sites: these come first, and with them what was set aside of theirs. */
function inOrder(places: readonly Place[], seesCoincidences: boolean): readonly Place[] {
  const isFirst = ({ path }: Place) => !seesCoincidences && ['/sites', '/set-asides'].includes(path);
  return [...places.filter(isFirst), ...places.filter((place) => !isFirst(place))];
}
