import { type SiteRecord } from '#shared/contract/site-record';
import { type Db } from '../db';
import { type MeasuredTexts } from '../reconcile/event-maker';

/** A trigger as it stands in its table, and whether its event stands. */
export interface TriggerRow {
  readonly id: number;
  readonly siteId: number;
  readonly series: string;
  readonly sequence: string;
  readonly variant: number;
  readonly kind: string;
  readonly reading: string;
  readonly readingForm: string;
  readonly sigma: string;
  readonly amplitude: string;
  readonly extra: string | null;
  readonly contentHash: Buffer;
  readonly stands: 0 | 1;
  /** The numbering in which it is counted: that of the set-aside that it was mended from, or its own. */
  readonly countedIn: string;
}

/** What a trigger says, as its row has it. */
export type TriggerTexts = Pick<TriggerRow, 'series' | 'sequence' | 'kind' | 'reading' | 'readingForm' | 'sigma' | 'amplitude'>;

const TRIGGER_QUERY = `SELECT t.id, t.site_id AS siteId, t.series, t.sequence, t.variant, t.kind, t.reading, t.reading_form AS readingForm, t.sigma,
  t.amplitude, t.extra, t.content_hash AS contentHash, e.trigger_id IS NOT NULL AS stands, coalesce(m.series, t.series) AS countedIn
  FROM triggers AS t LEFT JOIN events AS e ON e.trigger_id = t.id LEFT JOIN set_asides AS m ON m.id = t.mended_from_id`;

/** A trigger that is to be written. */
export interface NewTrigger {
  readonly siteId: number;
  readonly series: string;
  /** Without leading zeros. */
  readonly sequence: string;
  readonly variant: number;
  readonly kind: string;
  readonly record: SiteRecord;
  readonly contentHash: Buffer;
  readonly receivedAtMs: number;
  readonly mendedFromId: number | null;
}

/** How a kind is written where nothing else is said. */
const writtenKind = (kind: string): string => (kind === 'trigger' ? '' : kind);

/** Further columns, and the sequence or kind where they were written otherwise than they are kept. */
function extraOf({ sequence, kind, record }: NewTrigger): string | null {
  const { extra } = record;
  const isSame = record.sequence === sequence && record.kind === writtenKind(kind);
  if (isSame && (!extra || Object.keys(extra).length === 0)) return null;
  const written = {
    ...extra,
    ...(record.sequence === sequence ? {} : { sequence: record.sequence }),
    ...(record.kind === writtenKind(kind) ? {} : { kind: record.kind }),
  };
  // One text for one content, whatever the order of its columns.
  return JSON.stringify(Object.fromEntries(Object.entries(written).sort(([a], [b]) => (a < b ? -1 : 1))));
}

const formOf = (form: string): SiteRecord['readingForm'] => (form === 'tai-pair' ? 'tai-pair' : 'iso');

/** The texts of a trigger from which its event is computed. */
export const textsOf = ({ series, sequence, kind, reading, readingForm, sigma, amplitude }: TriggerTexts): MeasuredTexts => ({
  series,
  sequence,
  kind,
  reading,
  readingForm: formOf(readingForm),
  sigmaNs: sigma,
  amplitude,
});

/** The record that a trigger came as, verbatim. */
export function recordOf(row: TriggerTexts & Pick<TriggerRow, 'extra'>): SiteRecord {
  const kept: unknown = row.extra === null ? {} : JSON.parse(row.extra);
  const columns = Object.entries(typeof kept === 'object' && kept !== null ? kept : {}).map(([name, text]): [string, string] => [
    name,
    String(text),
  ]);
  const written = new Map(columns);
  const extra = columns.filter(([name]) => name !== 'sequence' && name !== 'kind');
  return {
    ...textsOf(row),
    sequence: written.get('sequence') ?? row.sequence,
    kind: written.get('kind') ?? writtenKind(row.kind),
    ...(extra.length === 0 ? {} : { extra: Object.fromEntries(extra) }),
  };
}

/** Reads and writes triggers. */
export class TriggerRows {
  private readonly insert;
  private readonly byIdentity;
  private readonly byId;

  constructor({ $client: client }: Db) {
    this.insert = client.prepare(
      `INSERT INTO triggers (site_id, series, sequence, variant, kind, reading, reading_form, sigma, amplitude, extra, content_hash,
         received_at_ms, mended_from_id) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
    );
    this.byIdentity = client.prepare<[number, string, string], TriggerRow>(
      `${TRIGGER_QUERY} WHERE t.site_id = ? AND t.series = ? AND t.sequence = ? ORDER BY t.variant`,
    );
    this.byId = client.prepare<[number], TriggerRow>(`${TRIGGER_QUERY} WHERE t.id = ?`);
  }

  /** Writes a trigger and answers its id. */
  add(trigger: NewTrigger): number {
    const { record } = trigger;
    const { lastInsertRowid } = this.insert.run(
      trigger.siteId,
      trigger.series,
      trigger.sequence,
      trigger.variant,
      trigger.kind,
      record.reading,
      record.readingForm,
      record.sigmaNs,
      record.amplitude,
      extraOf(trigger),
      trigger.contentHash,
      trigger.receivedAtMs,
      trigger.mendedFromId,
    );
    return Number(lastInsertRowid);
  }

  /** All contents that came under an identity. */
  variants(siteId: number, series: string, sequence: string): readonly TriggerRow[] {
    return this.byIdentity.all(siteId, series, sequence);
  }

  find(id: number): TriggerRow {
    const row = this.byId.get(id);
    if (!row) throw new Error(`there is no trigger ${id}`);
    return row;
  }
}
