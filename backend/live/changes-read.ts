import { LIVE_MOST, type ChangeHint, type NetworkChanges } from '#shared/contract/live-changes';
import { coincidencesInBrief } from '../coincidences/coincidence-brief';
import { type NotedRows } from '../coincidences/change-note';
import { COINCIDENCE_COLUMNS, type CoincidenceRow } from '../coincidences/coincidence-list';
import { type Db } from '../db';
import { EVENT_COLUMNS, eventsInBrief, type EventRow } from '../events/event-list';
import { completenessOf } from '../ingest/completeness';
import { part, rowsOf, type Query } from '../search/query';
import { changesQuery, type ChangeRow } from '../streams/change-list';
import { changeNoteOf, countOf, type ChangeNote, type IdRange } from './change-notes';

/** Rows of `changes` that are looked at for one message. */
const MOST_ROWS = 500;
/** Rows of a range of ids that are looked at for those of one change: beyond, they are not told. */
const MOST_WIDTH = 20_000;

/** Changes as they are told to who sees all of the network, and of which sites those ids are that say no site. */
export interface ChangesRead {
  readonly changes: NetworkChanges;
  readonly siteOfGone: ReadonlyMap<number, number>;
  readonly siteOfDecided: ReadonlyMap<number, number>;
}

/** What is counted up to the limits of a message. */
interface Counts {
  readonly events: number;
  readonly coincidences: number;
  readonly ids: number;
  readonly hints: number;
}

const idsIn = (ids: readonly number[] | IdRange): number => ('from' in ids ? ids.to - ids.from + 1 : ids.length);

function countsOf(note: ChangeNote): Counts {
  const none = { events: 0, coincidences: 0, ids: 0, hints: 0 };
  switch (note.is) {
    case 'events':
      return { ...none, events: note.count, ids: idsIn(note.withdrawn) };
    case 'coincidences': {
      const { appeared, ended, final } = note.coincidences;
      return { ...none, coincidences: countOf(appeared), ids: Math.max(countOf(ended), countOf(final)) };
    }
    case 'set-asides':
      return { ...none, ids: note.decided.length };
    case 'hint':
      return { ...none, hints: 1 };
    case 'completeness':
      return none;
  }
}

const sum = (a: Counts, b: Counts): Counts => ({
  events: a.events + b.events,
  coincidences: a.coincidences + b.coincidences,
  ids: a.ids + b.ids,
  hints: a.hints + b.hints,
});

const fits = ({ events, coincidences, ids, hints }: Counts): boolean =>
  events <= LIVE_MOST.events && coincidences <= LIVE_MOST.coincidences && ids <= LIVE_MOST.ids && hints <= LIVE_MOST.hints;

/** As many of the changes as a message holds, and at least the first. */
function notesThatFit(rows: readonly ChangeRow[]): ChangeNote[] {
  const notes: ChangeNote[] = [];
  let counts: Counts = { events: 0, coincidences: 0, ids: 0, hints: 0 };
  for (const row of rows) {
    const note = changeNoteOf(row);
    counts = sum(counts, countsOf(note));
    if (notes.length > 0 && !fits(counts)) break;
    notes.push(note);
  }
  return notes;
}

/**
 * Reads the changes of a network behind a number, as many as a message holds; inside a transaction, so that all is of one state.
 *
 * @returns undefined when there are none
 */
export function readChanges(db: Db, networkId: number, after: number): ChangesRead | undefined {
  const notes = notesThatFit(rowsOf<ChangeRow>(db, changesQuery(networkId, after, MOST_ROWS)));
  const [first, last] = [notes[0], notes.at(-1)];
  if (!first || !last) return undefined;
  const events = eventsOf(db, networkId, notes);
  const decided = notes.flatMap((note) => (note.is === 'set-asides' ? note.decided : []));
  const changes: NetworkChanges = {
    kind: 'changes',
    networkId,
    from: first.number,
    to: last.number,
    atMs: last.atMs,
    events: events.told,
    coincidences: coincidencesOf(db, networkId, notes),
    completeTo: completenessOf(db, networkId) ?? null,
    completeness: completenessIn(notes),
    setAsides: setAsidesIn(notes),
    decided,
    hints: hintsIn(notes),
  };
  return { changes, siteOfGone: events.siteOfGone, siteOfDecided: sitesOf(db, 'set_asides', decided) };
}

function sitesOf(db: Db, table: 'set_asides' | 'triggers', ids: readonly number[]): ReadonlyMap<number, number> {
  if (ids.length === 0) return new Map();
  const query = part(`SELECT t.id, t.site_id AS siteId FROM json_each(?) i JOIN ${table} t ON t.id = i.value`, JSON.stringify(ids));
  const rows = rowsOf<{ id: number; siteId: number | null }>(db, query);
  return new Map(rows.flatMap(({ id, siteId }) => (siteId === null ? [] : [[id, siteId]])));
}

/** The events that a change brought and no later one has touched. */
export const eventsOfChangeQuery = (networkId: number, change: number, { from, to }: IdRange): Query =>
  part(
    `SELECT ${EVENT_COLUMNS} FROM events WHERE trigger_id BETWEEN ? AND ? AND change_number = ? AND +network_id = ? ORDER BY trigger_id LIMIT ?`,
    from,
    to,
    change,
    networkId,
    LIVE_MOST.events + 1,
  );

const standingQuery = (ids: readonly number[]): Query =>
  part('SELECT e.trigger_id AS id FROM json_each(?) i JOIN events e ON e.trigger_id = i.value', JSON.stringify(ids));

function eventsOf(
  db: Db,
  networkId: number,
  notes: readonly ChangeNote[],
): { readonly told: NetworkChanges['events']; readonly siteOfGone: ReadonlyMap<number, number> } {
  const rows: EventRow[] = [];
  const withdrawn = new Set<number>();
  let isCut = false;
  for (const note of notes) {
    if (note.is !== 'events') continue;
    if ('from' in note.withdrawn) isCut = true;
    else for (const id of note.withdrawn) withdrawn.add(id);
    const { triggers, number } = note;
    if (!triggers) continue;
    if (idsIn(triggers) > MOST_WIDTH) isCut = true;
    else rows.push(...rowsOf<EventRow>(db, eventsOfChangeQuery(networkId, number, triggers)));
  }
  if (isCut || rows.length > LIVE_MOST.events || withdrawn.size > LIVE_MOST.ids)
    return { told: { items: [], gone: [], isCut: true }, siteOfGone: new Map() };
  if (withdrawn.size > 0) for (const { id } of rowsOf<{ id: number }>(db, standingQuery([...withdrawn]))) withdrawn.delete(id);
  const gone = [...withdrawn];
  return { told: { items: eventsInBrief(db, rows), gone, isCut: false }, siteOfGone: sitesOf(db, 'triggers', gone) };
}

/** The coincidences in force that changes brought. */
export const coincidencesSinceQuery = (networkId: number, from: number, to: number): Query =>
  part(
    `SELECT ${COINCIDENCE_COLUMNS} FROM coincidences c INDEXED BY coincidences_since
     WHERE c.network_id = ? AND c.is_current = 1 AND c.since_change BETWEEN ? AND ? LIMIT ?`,
    networkId,
    from,
    to,
    LIVE_MOST.coincidences + 1,
  );

const CUT: NetworkChanges['coincidences'] = { items: [], ended: [], final: [], crowded: 0, isCut: true };

function coincidencesOf(db: Db, networkId: number, notes: readonly ChangeNote[]): NetworkChanges['coincidences'] {
  const found = notes.filter((note) => note.is === 'coincidences');
  const [first, last] = [found[0], found.at(-1)];
  if (!first || !last) return { ...CUT, isCut: false };
  let crowded = 0;
  const ended = new Set<number>();
  const final = new Set<number>();
  for (const { coincidences, crowded: more } of found) {
    crowded += more;
    const endedIds = idsOf(db, coincidences.ended, networkId, 'former');
    const finalIds = idsOf(db, coincidences.final, networkId, 'final');
    if (!endedIds || !finalIds) return { ...CUT, crowded };
    for (const id of endedIds) ended.add(id);
    for (const id of finalIds) final.add(id);
  }
  const brought = found.some(({ coincidences }) => countOf(coincidences.appeared) > 0);
  const rows = brought ? rowsOf<CoincidenceRow>(db, coincidencesSinceQuery(networkId, first.number, last.number)) : [];
  const isCut = rows.length > LIVE_MOST.coincidences || ended.size > LIVE_MOST.ids || final.size > LIVE_MOST.ids;
  if (isCut) return { ...CUT, crowded };
  return { items: coincidencesInBrief(db, rows), ended: [...ended], final: [...final], crowded, isCut };
}

/** The rows of a change by id. Where it says their range, all of it that are in the state, which is true of them whichever change did it. */
function idsOf(db: Db, rows: NotedRows, networkId: number, state: 'former' | 'final'): readonly number[] | undefined {
  if ('ids' in rows) return rows.ids;
  if (rows.to - rows.from >= MOST_WIDTH) return undefined;
  const found = rowsOf<{ id: number }>(
    db,
    part(
      'SELECT id FROM coincidences WHERE id BETWEEN ? AND ? AND +network_id = ? AND state = ? LIMIT ?',
      rows.from,
      rows.to,
      networkId,
      state,
      LIVE_MOST.ids + 1,
    ),
  );
  return found.length > LIVE_MOST.ids ? undefined : found.map(({ id }) => id);
}

function completenessIn(notes: readonly ChangeNote[]): NetworkChanges['completeness'] {
  const latest = new Map<number, NetworkChanges['completeness'][number]>();
  for (const note of notes)
    if (note.is === 'completeness')
      for (const [site, completeTo] of Object.entries(note.sites)) latest.set(Number(site), { siteId: Number(site), completeTo });
  return [...latest.values()];
}

function setAsidesIn(notes: readonly ChangeNote[]): NetworkChanges['setAsides'] {
  const records = new Map<number, number>();
  for (const note of notes)
    if (note.is === 'set-asides')
      for (const [site, reasons] of Object.entries(note.sites)) {
        const more = Object.values(reasons).reduce((total, count) => total + count, 0);
        records.set(Number(site), (records.get(Number(site)) ?? 0) + more);
      }
  return [...records].map(([siteId, count]) => ({ siteId, records: count }));
}

function hintsIn(notes: readonly ChangeNote[]): ChangeHint[] {
  const hints = new Map<string, ChangeHint>();
  for (const note of notes) if (note.is === 'hint') hints.set(JSON.stringify(note.hint), note.hint);
  return [...hints.values()];
}
