import { type Command } from './command-store';

/** A site as the palette knows it. */
interface SiteNamed {
  readonly id: number;
  readonly code: string;
  readonly name: string;
}

/**
 * A way to the page of every site, found by its code and by its name.
 *
 * @param goTo leads to a path of the application
 */
export const siteCommands = (sites: readonly SiteNamed[], goTo: (path: string) => unknown): Command[] =>
  sites.map(({ id, code, name }) => ({
    title: name === '' ? code : `${code}, ${name}`,
    section: 'Site',
    icon: 'cell-tower',
    run: () => goTo(`/sites/${id}`),
  }));
