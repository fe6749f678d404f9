import { type CoincidenceSort } from '#shared/contract/coincidence-routes';

/** A column of the table of coincidences. */
export interface SetColumn {
  readonly name: string;
  readonly head: string;
  readonly widthPx: number;
  readonly sort?: CoincidenceSort;
  readonly isRight?: boolean;
}

/** The columns that every network has, in their usual order; one for each pinned frame follows. */
export const SET_COLUMNS: readonly SetColumn[] = [
  { name: 'time', head: 'First trigger', widthPx: 144, sort: 'time' },
  { name: 'sites', head: 'Sites', widthPx: 100 },
  { name: 'fold', head: 'Fold', widthPx: 48, sort: 'fold', isRight: true },
  { name: 'span', head: 'Span', widthPx: 92, sort: 'span', isRight: true },
  { name: 'interval', head: 'Interval nearest light', widthPx: 204, sort: 'margin' },
  { name: 'turning', head: 'Turns, c', widthPx: 58, sort: 'turning', isRight: true },
  { name: 'state', head: 'State', widthPx: 46 },
  { name: 'amplitude', head: 'Amplitude', widthPx: 76, sort: 'amplitude', isRight: true },
  { name: 'rule', head: 'Rule', widthPx: 84 },
  { name: 'name', head: 'Name', widthPx: 110 },
];
const AT_FIRST = ['time', 'sites', 'span', 'interval', 'turning', 'state'];
export const FRAME_WIDTH_PX = 48;
export const LEAST_WIDTH_PX = 40;
export const MOST_WIDTH_PX = 480;

/** A column that is shown, with its width. */
export interface ShownColumn extends SetColumn {
  /** Its frame's code; absent for the others. */
  readonly frame?: string;
}

/**
 * The columns that are shown, in their order.
 *
 * @param text `name:width,name:width` of an address; absent as usual
 * @param frames codes of the pinned frames
 */
export function shownColumns(text: string | undefined, frames: readonly string[]): ShownColumn[] {
  const all = new Map(allColumns(frames).map((column) => [column.name, column]));
  if (text === undefined) {
    return [...AT_FIRST, ...frames.map(frameName)].flatMap((name) => all.get(name) ?? []);
  }
  return text.split(',').flatMap((part) => {
    const [name = '', width = ''] = part.split(':');
    const column = all.get(name);
    if (!column) return [];
    all.delete(name);
    return [{ ...column, widthPx: widthIn(Number(width) || column.widthPx) }];
  });
}

export const allColumns = (frames: readonly string[]): ShownColumn[] => [
  ...SET_COLUMNS,
  ...frames.map((frame) => ({ name: frameName(frame), head: frame, widthPx: FRAME_WIDTH_PX, frame })),
];

/** The same as the text of an address. */
export const columnsText = (columns: readonly ShownColumn[]): string =>
  columns.map(({ name, widthPx }) => `${name}:${Math.round(widthPx)}`).join(',');

export const widthIn = (px: number): number => Math.min(MOST_WIDTH_PX, Math.max(LEAST_WIDTH_PX, Math.round(px)));

const frameName = (code: string): string => `in_${code.replace(/\W/g, '_')}`;

/** Columns with one at another place; unchanged where there is none. */
export function movedColumn(columns: readonly ShownColumn[], name: string, by: number): ShownColumn[] {
  const from = columns.findIndex((column) => column.name === name);
  const to = from + by;
  const column = columns[from];
  if (!column || to < 0 || to >= columns.length) return [...columns];
  const rest = columns.filter((one) => one !== column);
  return [...rest.slice(0, to), column, ...rest.slice(to)];
}
