import { type ErrorTables } from '#shared/relativity/events';
import { type Db } from '../db';
import { referenceSigmaNs, type SiteVersion, type StatedSegment } from './version-rows';

/**
 * Gives a row of the error tables to whatever events' errors rest on, in the order in which it is first asked for. A row never changes its
 * meaning: what is stated anew gets a row of its own, and tables that were handed out stay as they are.
 *
 * A row of sites is a delay and a place as stated, so that versions that differ in nothing of that share one and their delay cancels. A row of
 * segments is a segment with a version of its reference; a row of references is such a version.
 */
export class ErrorRows {
  private readonly versionRows = new Map<string, number>();
  private readonly segmentRows = new Map<string, number>();
  private readonly referenceRows = new Map<number, number>();
  private readonly delaySigmaNs: number[] = [];
  private readonly positionSigmaM: number[] = [];
  private readonly segments: { readonly stated: StatedSegment; readonly reference: number }[] = [];
  private readonly referenceSigmaNs: number[] = [];
  private latest: ErrorTables | undefined;

  constructor(private readonly db: Db) {}

  /** The row of a site version's delay and place. */
  versionRow(version: SiteVersion): number {
    const { siteId, itrsM, positionSigmaM, delayNs, delaySigmaNs } = version;
    const key = [siteId, ...(itrsM ?? []), positionSigmaM, delayNs, delaySigmaNs].join(' ');
    const known = this.versionRows.get(key);
    if (known !== undefined) return known;
    const row = this.delaySigmaNs.push(delaySigmaNs) - 1;
    this.positionSigmaM.push(positionSigmaM);
    this.versionRows.set(key, row);
    this.latest = undefined;
    return row;
  }

  /** The row of a segment, -1 for an exact clock's. */
  segmentRow(stated: StatedSegment): number {
    if (stated.id === null) return -1;
    const key = `${stated.id} ${stated.referenceVersionId ?? 0}`;
    const known = this.segmentRows.get(key);
    if (known !== undefined) return known;
    const reference = stated.referenceVersionId === null ? -1 : this.referenceRow(stated.referenceVersionId);
    const row = this.segments.push({ stated, reference }) - 1;
    this.segmentRows.set(key, row);
    this.latest = undefined;
    return row;
  }

  private referenceRow(versionId: number): number {
    const known = this.referenceRows.get(versionId);
    if (known !== undefined) return known;
    const row = this.referenceSigmaNs.push(referenceSigmaNs(this.db, versionId)) - 1;
    this.referenceRows.set(versionId, row);
    return row;
  }

  /** All rows given so far; the same object until there are more. */
  tables(): ErrorTables {
    this.latest ??= {
      siteDelaySigmaNs: Float64Array.from(this.delaySigmaNs),
      sitePositionSigmaM: Float64Array.from(this.positionSigmaM),
      segmentOffsetSigmaNs: Float64Array.from(this.segments, ({ stated }) => stated.segment.offsetSigmaNs),
      segmentRateSigmaNsPerDay: Float64Array.from(this.segments, ({ stated }) => stated.segment.rateSigmaNsPerDay),
      segmentCovarianceNs2PerDay: Float64Array.from(this.segments, ({ stated }) => stated.segment.covarianceNs2PerDay),
      segmentReference: Int32Array.from(this.segments, ({ reference }) => reference),
      referenceSigmaNs: Float64Array.from(this.referenceSigmaNs),
    };
    return this.latest;
  }
}
