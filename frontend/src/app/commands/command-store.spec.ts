import { describe, expect, it } from 'vitest';
import { type Command, findCommands } from './command-store';

const command = (title: string, section: Command['section'] = 'Everywhere'): Command => ({ title, section, run: () => undefined });
const all = [command('People', 'Go to'), command('Show the audit trail'), command('Audit trail', 'Go to')];
const titles = (typed: string) => findCommands(all, typed).map(({ title }) => title);

describe('the palette', () => {
  it('finds all where nothing was typed', () => {
    expect(titles(' ')).toEqual(['People', 'Show the audit trail', 'Audit trail']);
  });

  it('puts first what begins with what was typed', () => {
    expect(titles('audit')).toEqual(['Audit trail', 'Show the audit trail']);
  });

  it('takes words in any order and case, also of the section', () => {
    expect(titles('TRAIL go')).toEqual(['Audit trail']);
    expect(titles('nothing')).toEqual([]);
  });
});
