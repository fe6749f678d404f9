import { type SetAsideInFull } from '#shared/contract/set-aside-routes';

/** The fields of a record, as far as they can be told from what the site sent. */
export interface Fields {
  readonly series: string;
  readonly sequence: string;
  readonly kind: string;
  readonly reading: string;
  readonly readingForm: 'iso' | 'tai-pair';
  readonly sigmaNs: string;
  readonly amplitude: string;
}

/** What a site sent by its columns, or as one line that is no record of it: in the order in which it came. */
export function fieldsSent(verbatim: string): readonly (readonly [name: string, text: string])[] {
  try {
    const sent: unknown = JSON.parse(verbatim);
    if (typeof sent !== 'object' || sent === null || Array.isArray(sent)) return [];
    return Object.entries(sent).flatMap(([name, value]: [string, unknown]) => {
      if (typeof value === 'string') return [[name, value] as const];
      if (typeof value !== 'object' || value === null) return [];
      return Object.entries(value).map(([inner, text]: [string, unknown]) => [inner, String(text)] as const);
    });
  } catch {
    return [];
  }
}

/** What a record that is to be mended begins with. */
export function fieldsOf({ verbatim, series, sequence }: Pick<SetAsideInFull, 'verbatim' | 'series' | 'sequence'>): Fields {
  const sent = new Map(fieldsSent(verbatim));
  const kind = sent.get('kind') ?? '';
  return {
    series: sent.get('series') ?? (series === '*' ? '' : series),
    sequence: sent.get('sequence') ?? sequence ?? '',
    kind: ['trigger', 'reference', 'test'].includes(kind) ? kind : 'trigger',
    reading: sent.get('reading') ?? '',
    readingForm: sent.get('readingForm') === 'tai-pair' ? 'tai-pair' : 'iso',
    sigmaNs: sent.get('sigmaNs') ?? '',
    amplitude: sent.get('amplitude') ?? '',
  };
}
