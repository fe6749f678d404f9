import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { skewline } from '../support/command';
import { newFolder } from '../support/folder';
import { filesOf, rowsOf } from '../support/results';
import { smallNetwork } from '../support/small-network';

const HEAD = 'site,sequence,reading,note';
const line = (sequence: number, note = ''): string => `A,${sequence},2020-01-02T00:00:${String(sequence).padStart(2, '0')},${note}`;

/** What a run over one log gives: lines counted, names of events, and `line reason text` of what is set aside. */
async function outcomeOf(log: string, other?: string) {
  const folder = newFolder('broken');
  writeFileSync(join(folder, 'network.json'), JSON.stringify(smallNetwork()));
  writeFileSync(join(folder, 'a.csv'), log);
  writeFileSync(join(folder, 'b.csv'), other ?? `${HEAD}\n`);
  const { code, stderr } = await skewline(['reconcile', '--network', 'network.json', '--out', 'out', 'a.csv', 'b.csv'], folder);
  expect(code).toBe(0);
  const files = filesOf(join(folder, 'out'));
  const { lines } = JSON.parse(files['summary.json']!) as { lines: number };
  return {
    warnings: stderr.trim().split('\n').slice(0, -1),
    lines,
    events: rowsOf(files['events.csv']!).map(({ sequence }) => Number(sequence)),
    aside: rowsOf(files['set-aside.csv']!).map((row) => [row['file'], Number(row['line']), row['reason'], row['text']]),
  };
}

describe('a log with broken quotes', () => {
  it('would give all of its lines if they were whole', async () => {
    const log = [HEAD, line(1), line(2, '"two"'), line(3), line(4, '"four\n"'), line(5)].join('\n');
    expect(await outcomeOf(log)).toEqual({ warnings: [], lines: 5, events: [1, 2, 3, 4, 5], aside: [] });
  });

  it('is set aside from the record whose quote is never closed, as it stands, and other logs are read on', async () => {
    const open = [line(3, '"three'), line(4), line(5, 'it\u2019s five')].join('\n');
    const log = `${[HEAD, line(1), line(2, '"two"')].join('\n')}\n${open}\n`;
    expect(await outcomeOf(log, `${HEAD}\n${line(9)}\n`)).toEqual({
      warnings: ['warning: a.csv: line 4: a quote is not closed: everything from there to the end of the file is one record, set aside'],
      lines: 4,
      events: [1, 2, 9],
      aside: [['a.csv', 4, 'columns', open]],
    });
  });

  it('loses the one line in which a quote is followed by something else', async () => {
    const log = [HEAD, line(1, '"one"!'), line(2), line(3, '"thr"ee"'), line(4, '"four"'), ''].join('\r\n');
    expect(await outcomeOf(log)).toEqual({
      warnings: [],
      lines: 4,
      events: [2, 4],
      aside: [
        ['a.csv', 2, 'columns', line(1, '"one"!')],
        ['a.csv', 4, 'columns', line(3, '"thr"ee"')],
      ],
    });
  });

  it('loses no more when an open quote meets the quote of a later line', async () => {
    const log = [HEAD, line(1, '"one'), line(2), line(3, '"three"'), line(4), ''].join('\n');
    expect(await outcomeOf(log)).toEqual({ warnings: [], lines: 4, events: [2, 3, 4], aside: [['a.csv', 2, 'columns', line(1, '"one')]] });
  });

  it('loses the one line in which a blank follows a closing quote', async () => {
    const log = [HEAD, line(1), line(2).replace('A', '"A" '), line(3, '"three"'), ''].join('\n');
    expect(await outcomeOf(log)).toEqual({
      warnings: [],
      lines: 3,
      events: [1, 3],
      aside: [['a.csv', 3, 'columns', line(2).replace('A', '"A" ')]],
    });
  });
});
