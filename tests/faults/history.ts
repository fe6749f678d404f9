import { type SiteRecord } from '#shared/contract/site-record';
import { type Db } from '../../backend/db';
import { type FinalFate } from '../../backend/site-client/site-client';

/** A record of a site, told apart from every other content. */
export type Name = string;

export const nameOf = (site: string, { series, sequence, kind, reading, sigmaNs, amplitude }: SiteRecord): Name =>
  JSON.stringify([site, series, sequence, kind, reading, sigmaNs, amplitude]);

/** The number under which a record comes, of which each site has one content alone that stands. */
const identityOf = (name: Name): string => JSON.stringify((JSON.parse(name) as string[]).slice(0, 3));

/** What was tried and what was acknowledged, written down as it happened. */
export class History {
  readonly attempts: { readonly name: Name; readonly isWellFormed: boolean }[] = [];
  readonly answers: { readonly name: Name; readonly fate: FinalFate['fate'] }[] = [];

  attempt(site: string, record: SiteRecord): void {
    const isWellFormed = /^\d+$/.test(record.sequence) && /^\d{4}-/.test(record.reading);
    this.attempts.push({ name: nameOf(site, record), isWellFormed });
  }

  answer(site: string, record: SiteRecord, { fate }: FinalFate): void {
    this.answers.push({ name: nameOf(site, record), fate });
  }
}

/** What a database holds of all that sites sent. */
export interface Kept {
  readonly triggers: readonly { readonly name: Name; readonly stands: boolean }[];
  readonly setAsides: readonly Name[];
}

interface TriggerText {
  site: string;
  series: string;
  sequence: string;
  kind: string;
  reading: string;
  sigmaNs: string;
  amplitude: string;
  stands: number;
}

export function keptIn(db: Db): Kept {
  const triggers = db.$client
    .prepare<[], TriggerText>(
      `SELECT s.code AS site, t.series, t.sequence, iif(t.kind = 'trigger', '', t.kind) AS kind, t.reading, t.sigma AS sigmaNs, t.amplitude,
         e.trigger_id IS NOT NULL AS stands
       FROM triggers AS t JOIN sites AS s ON s.id = t.site_id LEFT JOIN events AS e ON e.trigger_id = t.id`,
    )
    .all()
    .map(({ site, stands, ...texts }) => ({ name: nameOf(site, { ...texts, readingForm: 'iso' }), stands: stands === 1 }));
  const setAsides = db.$client
    .prepare<[], { site: string; verbatim: string }>(
      "SELECT s.code AS site, a.verbatim FROM set_asides AS a JOIN sites AS s ON s.id = a.site_id WHERE a.state = 'open'",
    )
    .all()
    .map(({ site, verbatim }) => nameOf(site, JSON.parse(verbatim) as SiteRecord));
  return { triggers, setAsides };
}

/** A history held against what was kept. */
export interface Judged {
  /** Records that were handed to a client, and that it said what became of. */
  readonly attempted: number;
  readonly acknowledged: number;
  /** Contents that stand, and that are set aside. */
  readonly stored: number;
  readonly setAside: number;
  /** Acknowledged, and kept nowhere; or in the database otherwise than what was sent comes to. */
  readonly lost: readonly Name[];
  /** Kept more than once. */
  readonly duplicated: readonly Name[];
  /** Kept, and never sent. */
  readonly unexpected: readonly Name[];
  /** Stands where it should be set aside, or the other way round. */
  readonly misjudged: readonly Name[];
}

/**
 * Holds a history against what a database kept. Of each number of a site one content stands, when it is well formed and alone; all others are
 * set aside, each once, however often they came.
 */
export function judge({ attempts, answers }: History, { triggers, setAsides }: Kept): Judged {
  const sent = new Set(attempts.map(({ name }) => name));
  const wellFormed = new Set(attempts.flatMap(({ name, isWellFormed }) => (isWellFormed ? [name] : [])));
  const contents = new Map<string, number>();
  for (const name of wellFormed) contents.set(identityOf(name), (contents.get(identityOf(name)) ?? 0) + 1);
  const mustStand = (name: Name): boolean => wellFormed.has(name) && contents.get(identityOf(name)) === 1;
  const stands = new Set(triggers.flatMap(({ name, stands }) => (stands ? [name] : [])));
  const aside = new Set(setAsides);
  const held = new Set([...triggers.map(({ name }) => name), ...aside]);
  const acknowledged = [...new Set(answers.flatMap(({ name, fate }) => (fate === 'unsendable' ? [] : [name])))];
  return {
    attempted: attempts.length,
    acknowledged: answers.length,
    stored: stands.size,
    setAside: aside.size,
    lost: acknowledged.filter((name) => !held.has(name)),
    duplicated: [...twice(triggers.map(({ name }) => name)), ...twice(setAsides)],
    unexpected: [...held].filter((name) => !sent.has(name)),
    misjudged: acknowledged.filter(
      (name) => held.has(name) && (stands.has(name) !== mustStand(name) || aside.has(name) === mustStand(name)),
    ),
  };
}

const twice = (names: readonly Name[]): Name[] => {
  const seen = new Set<Name>();
  return names.filter((name) => seen.size === seen.add(name).size);
};
