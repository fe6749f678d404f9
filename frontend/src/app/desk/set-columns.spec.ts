import { describe, expect, it } from 'vitest';
import { columnsText, movedColumn, shownColumns } from './set-columns';

const names = (columns: readonly { readonly name: string }[]) => columns.map(({ name }) => name);

describe('the columns of the table', () => {
  it('are the usual ones and one for each pinned frame where the address says nothing', () => {
    expect(names(shownColumns(undefined, ['bary', 'cmb']))).toEqual(['time', 'sites', 'span', 'interval', 'turning', 'state', 'in_bary', 'in_cmb']); // prettier-ignore
  });
  it('come back from the address in their order and width, each once, known ones alone', () => {
    const columns = shownColumns('fold:60,time:9000,in_cmb,fold:70,other:10', ['cmb']);
    expect(columns.map(({ name, widthPx }) => [name, widthPx])).toEqual([['fold', 60], ['time', 480], ['in_cmb', 48]]); // prettier-ignore
    expect(shownColumns(columnsText(columns), ['cmb'])).toEqual(columns);
  });
  it('move by one, and stay at the ends', () => {
    const columns = shownColumns('time,sites,span', []);
    expect(names(movedColumn(columns, 'time', 1))).toEqual(['sites', 'time', 'span']);
    expect(names(movedColumn(columns, 'time', -1))).toEqual(['time', 'sites', 'span']);
    expect(names(movedColumn(columns, 'none', 1))).toEqual(['time', 'sites', 'span']);
  });
});
