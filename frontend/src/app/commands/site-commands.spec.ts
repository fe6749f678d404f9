import { describe, expect, it } from 'vitest';
import { type Command, findCommands } from './command-store';
import { siteCommands } from './site-commands';

const paths: string[] = [];
const sites = [
  { id: 8, code: 'ORL', name: 'Orlen ridge' },
  { id: 9, code: 'TAV', name: '' },
];
const others: Command[] = [{ title: 'Sites', section: 'Go to', run: () => paths.push('/sites') }];
const found = (typed: string) => findCommands([...others, ...siteCommands(sites, (path) => paths.push(path))], typed);

describe('the sites in the palette', () => {
  it('are found by code and by name, in any case', () => {
    expect(found('orl').map(({ title }) => title)).toEqual(['ORL, Orlen ridge']);
    expect(found('RIDGE').map(({ title }) => title)).toEqual(['ORL, Orlen ridge']);
    expect(found('tav').map(({ title }) => title)).toEqual(['TAV']);
  });

  it('lead to their pages', () => {
    found('ridge')[0]?.run();
    expect(paths).toEqual(['/sites/8']);
  });
});
