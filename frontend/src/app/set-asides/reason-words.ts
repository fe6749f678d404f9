import { type SetAside } from '#shared/contract/set-aside-routes';

/** Why a record is set aside, as the list has it. */
export const REASON_WORDS: Readonly<Record<SetAside['reason'], string>> = {
  columns: 'columns missing',
  site: 'site not known',
  sequence: 'number cannot be read',
  series: 'series cannot be read',
  kind: 'kind not known',
  'reading-empty': 'no reading',
  'reading-form': 'reading has no known form',
  date: 'no such date',
  'time-of-day': 'no such time of day',
  'no-leap-second': 'no leap second then',
  'before-1972': 'before 1972',
  sigma: 'error cannot be used',
  amplitude: 'amplitude cannot be used',
  'before-clock-record': 'before the clock record',
  'outside-run': 'outside every run',
  conflict: 'another content under its number',
  future: 'in the future',
  'outside-ephemeris': 'outside the ephemeris',
  ambiguous: 'can be read in two ways',
  unreadable: 'cannot be read',
  'too-long': 'too long',
};
