import { type Instant } from '#shared/time/instant';
import { type ChangeHint } from '#shared/contract/live-changes';
import { type CoincidenceNote, type NotedRows } from '../coincidences/change-note';
import { type ChangeRow } from '../streams/change-list';

/** Rows of consecutive ids, both ends included. */
export interface IdRange {
  readonly from: number;
  readonly to: number;
}

/** What a row of `changes` says, by what wrote it. */
export type ChangeNote = { readonly number: number; readonly atMs: number } & (
  | {
      readonly is: 'events';
      readonly count: number;
      readonly triggers: IdRange | undefined;
      readonly withdrawn: readonly number[] | IdRange;
    }
  | ({ readonly is: 'coincidences' } & CoincidenceNote)
  | { readonly is: 'completeness'; readonly sites: Readonly<Record<string, Instant>> }
  | {
      readonly is: 'set-asides';
      readonly sites: Readonly<Record<string, Readonly<Record<string, number>>>>;
      readonly decided: readonly number[];
    }
  | { readonly is: 'hint'; readonly hint: ChangeHint }
);

/** Reads a row of `changes`, whose body is what `noteChange` was given. */
export function changeNoteOf({ number, atMs, kind, body }: ChangeRow): ChangeNote {
  const said = JSON.parse(body) as Record<string, never>; // ours, and held to be JSON by the table
  switch (kind) {
    case 'records': {
      const { triggers, count = 0, withdrawn = [] } = said;
      return said['coincidences'] === undefined
        ? { number, atMs, is: 'events', count, triggers, withdrawn }
        : { number, atMs, is: 'coincidences', ...(said as unknown as CoincidenceNote) };
    }
    case 'completeness':
      return { number, atMs, is: 'completeness', sites: said['sites'] ?? {} };
    case 'set-aside':
      return { number, atMs, is: 'set-asides', sites: said['sites'] ?? {}, decided: said['decided'] ?? [] };
    default:
      return { number, atMs, is: 'hint', hint: hintOf(kind as ChangeHint['kind'], said) };
  }
}

function hintOf(kind: ChangeHint['kind'], { what, id, ruleId }: Readonly<Record<string, never>>): ChangeHint {
  return { kind, what: typeof what === 'string' ? what : null, id: id ?? ruleId ?? null };
}

/** How many rows are noted. */
export const countOf = (rows: NotedRows): number => ('ids' in rows ? rows.ids.length : rows.count);
