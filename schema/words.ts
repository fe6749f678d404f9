/** The words and limits that columns are held to. A table's file may need another's, so they stand in a file that needs none. */

/** The scales that a site's log may be in; `proper` is a platform's own time since its log began. */
export const SITE_SCALES = ['UTC', 'TAI', 'GPS', 'TT', 'proper'] as const;

/** How a site's place was stated. */
export const POSITION_KINDS = ['geodetic', 'itrs', 'platform'] as const;

/** Where the numbers of a clock segment come from. */
export const SEGMENT_ORIGINS = ['certificate', 'by-hand', 'fit', 'import'] as const;

/** Most bytes of one record as it came. */
export const MOST_RECORD_BYTES = 65_536;

export const TRIGGER_KINDS = ['trigger', 'reference', 'test'] as const;

/** How a reading is written: as the logs of the batch command have it, or one of the forms that an upload may be in. */
export const READING_FORMS = ['iso', 'tai-pair', 'gps-week', 'mjd', 'unix'] as const;

/**
 * Why a record is set aside: the reasons of a record by itself, another content under the same identity, a reading in the far future of the
 * server's clock, a platform's reading outside its ephemeris, an ambiguous one at a leap second, an upload that was cut short in a record.
 */
export const SET_ASIDE_WORDS = [
  'columns',
  'site',
  'sequence',
  'series',
  'kind',
  'reading-empty',
  'reading-form',
  'date',
  'time-of-day',
  'no-leap-second',
  'before-1972',
  'sigma',
  'amplitude',
  'before-clock-record',
  'outside-run',
  'conflict',
  'future',
  'outside-ephemeris',
  'ambiguous',
  'unreadable',
  'too-long',
] as const;

export const INTAKE_STATES = ['uploaded', 'mapped', 'checked', 'importing', 'imported', 'cancelled', 'failed', 'withdrawn'] as const;

/** Where the standard error of a reading comes from. */
export const SIGMA_ORIGINS = ['record', 'site', 'resolution'] as const;

export const INTERVAL_CLASSES = ['timelike', 'spacelike', 'undecided'] as const;

/** Staged: computed by a job and not yet in force. Open: may still grow. Final: cannot. Former: ended by a later change. */
export const COINCIDENCE_STATES = ['staged', 'open', 'final', 'former'] as const;

/** How a frame moves in its parent; what each needs stands in its definition. */
export const FRAME_KINDS = ['barycentric', 'velocity', 'toward-baseline', 'toward-horizon', 'comoving', 'opposite'] as const;

export const JOB_STATES = ['waiting', 'running', 'done', 'failed', 'cancelled'] as const;

export const CANDIDATE_STATES = ['draft', 'in-review', 'confirmed', 'disputed', 'withdrawn'] as const;

/** What may be claimed: of a pair in every frame, in one, of cause; of a pair or of the whole that no order is common; that it is undecided. */
export const CLAIM_KINDS = ['before-in-every-frame', 'before-in-frame', 'did-not-cause', 'no-common-order', 'undecided'] as const;

/** What a change may be of. */
export const CHANGE_KINDS = ['records', 'completeness', 'reprocessed', 'setup', 'rule', 'set-aside', 'intake', 'candidate', 'job'] as const;
