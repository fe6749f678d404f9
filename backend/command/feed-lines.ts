import { type RecordLayout } from '#shared/reconcile/record';
import { type SiteRecord } from '#shared/contract/site-record';
import { isColumnName } from '#shared/contract/site-socket';
import { RecordReader } from './log-file';
import { brokenHeader, emptyLog, headerOf } from './read-logs';
import { UsageProblem } from './usage-problem';

/** A record as it will be sent; `line` is that of the log on which it starts. */
export interface FedRecord {
  readonly record: SiteRecord;
  readonly line: number;
}

const MOST_TEXT_CHARACTERS = 16_384; // of a line that is sent as it stands: in UTF-8 no longer than a text may be

const MOST_SITE_CHARACTERS = 40; // of a name that is quoted

/** A line that is no record of this site, and why, which the server keeps as it stands and sets aside. */
const asItStands = (text: string, why: string): SiteRecord => ({
  series: '',
  sequence: '',
  kind: '',
  reading: '',
  readingForm: 'iso',
  sigmaNs: '',
  amplitude: '',
  extra: { line: text.slice(0, MOST_TEXT_CHARACTERS), why },
});

const QUOTED = /[",\r\n]/;
const lineOf = (fields: readonly string[]): string =>
  fields.map((field) => (QUOTED.test(field) ? `"${field.replaceAll('"', '""')}"` : field)).join(',');

/** Turns the bytes of one log into records to send, in their order. */
export class FeedLines {
  private readonly found: FedRecord[] = [];
  private readonly reader: RecordReader;
  /** Whether a record of this site has been seen: a log that begins with another's is the wrong log, or the wrong key. */
  private hasOurs = false;
  private columns: { readonly layout: RecordLayout; readonly names: readonly string[] } | undefined;

  /**
   * @param path as messages name the log
   * @param site the code of the site that the key is for
   * @param say hears of what is doubtful
   */
  constructor(
    private readonly path: string,
    private readonly site: string,
    private readonly say: (line: string) => void,
  ) {
    this.reader = new RecordReader((fields, { line }, isWhole, text) => this.take(fields, line, isWhole ? undefined : (text ?? '')));
  }

  /** Whether a line has begun that does not end yet. */
  get isWithinLine(): boolean {
    return this.reader.isWithinRecord;
  }

  /** The records that a block brings to their end. */
  add(block: Buffer): readonly FedRecord[] {
    if (!this.reader.swallowed) this.reader.add(block);
    return this.found.splice(0);
  }

  /** The last record, where the log does not end in a line end; a log without a header is a usage problem. */
  end(): readonly FedRecord[] {
    this.reader.end();
    if (!this.columns) throw emptyLog(this.path);
    const { swallowed } = this.reader;
    if (swallowed)
      this.say(
        `${this.path}: line ${swallowed.line}: ${swallowed.why}: everything from there to the end of the file is one record, of which the beginning is sent to be set aside`,
      );
    return this.found.splice(0);
  }

  private take(fields: readonly string[], line: number, broken: string | undefined): void {
    if (!this.columns) {
      if (broken !== undefined) throw brokenHeader(this.path, line);
      this.columns = this.headerOf(fields, line);
      return;
    }
    const { layout, names } = this.columns;
    if (broken !== undefined || fields.length !== layout.width) {
      const why =
        broken === undefined
          ? `has ${fields.length} columns; the header has ${layout.width}`
          : 'has a quote that is not written as CSV has it';
      this.found.push({ record: asItStands(broken ?? lineOf(fields), why), line });
      return;
    }
    const at = (column: number): string => (column < 0 ? '' : (fields[column] ?? ''));
    if (layout.site >= 0 && at(layout.site) !== this.site) {
      this.found.push({ record: this.ofAnother(fields, at(layout.site), line), line });
      return;
    }
    this.hasOurs = true;
    const extra = names.flatMap((name, column): [string, string][] => (name !== '' && at(column) !== '' ? [[name, at(column)]] : []));
    this.found.push({
      record: {
        series: at(layout.series),
        sequence: at(layout.sequence),
        kind: at(layout.kind),
        reading: at(layout.reading),
        readingForm: 'iso',
        sigmaNs: at(layout.sigma),
        amplitude: at(layout.amplitude),
        ...(extra.length > 0 && { extra: Object.fromEntries(extra) }),
      },
      line,
    });
  }

  private ofAnother(fields: readonly string[], site: string, line: number): SiteRecord {
    if (!this.hasOurs)
      throw new UsageProblem(`${this.path}: line ${line}: the site is ${JSON.stringify(site)}; the key is for ${this.site}`);
    return asItStands(lineOf(fields), `is of the site ${JSON.stringify(site.slice(0, MOST_SITE_CHARACTERS))}; the key is for ${this.site}`);
  }

  private headerOf(fields: readonly string[], line: number) {
    const { layout } = headerOf(fields, { path: this.path, name: this.path, site: this.site }, line);
    const meant = new Set([layout.site, layout.sequence, layout.series, layout.reading, layout.sigma, layout.amplitude, layout.kind]);
    const names = fields.map((name, column) => (meant.has(column) ? '' : name));
    const unusable = names.find((name, column) => !meant.has(column) && !isColumnName(name));
    if (unusable !== undefined)
      throw new UsageProblem(`${this.path}: line ${line}: a column is named ${JSON.stringify(unusable)}; give it another name`);
    return { layout, names };
  }
}
