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

/** What the bodies hold, by their kind: `noteChange` was given them, so that they are ours. */
interface EventsBody {
  readonly triggers?: IdRange;
  readonly count?: number;
  readonly withdrawn?: readonly number[] | IdRange;
}
interface CompletenessBody {
  readonly sites?: Readonly<Record<string, Instant>>;
}
interface SetAsidesBody {
  readonly sites?: Readonly<Record<string, Readonly<Record<string, number>>>>;
  readonly decided?: readonly number[];
}
interface HintBody {
  readonly what?: unknown;
  readonly id?: number;
  readonly ruleId?: number;
}

/** Reads a row of `changes`. */
export function changeNoteOf({ number, atMs, kind, body }: ChangeRow): ChangeNote {
  const said: unknown = JSON.parse(body);
  switch (kind) {
    case 'records': {
      const { coincidences, ...rest } = said as EventsBody & Partial<CoincidenceNote>;
      if (coincidences) return { number, atMs, is: 'coincidences', crowded: 0, ...rest, coincidences };
      const { triggers, count = 0, withdrawn = [] } = rest;
      return { number, atMs, is: 'events', count, triggers, withdrawn };
    }
    case 'completeness': {
      const { sites = {} } = said as CompletenessBody;
      return { number, atMs, is: 'completeness', sites };
    }
    case 'set-aside': {
      const { sites = {}, decided = [] } = said as SetAsidesBody;
      return { number, atMs, is: 'set-asides', sites, decided };
    }
    default: {
      const { what, id, ruleId } = said as HintBody;
      const hint = { kind: kind as ChangeHint['kind'], what: typeof what === 'string' ? what : null, id: id ?? ruleId ?? null };
      return { number, atMs, is: 'hint', hint };
    }
  }
}

/** How many rows are noted. */
export const countOf = (rows: NotedRows): number => ('ids' in rows ? rows.ids.length : rows.count);
