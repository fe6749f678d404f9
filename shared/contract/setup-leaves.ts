import * as z from 'zod';
import { type Instant } from '../time/instant';
import { instant, numberThat, record } from './leaves';
import { line, version } from './people';

/** Leaves of what a network is set up from: ids, names, notes, and times as they are given. */

export const MOST_NAME_CHARACTERS = 60;
const MOST_NOTE_CHARACTERS = 500;
const MOST_TIME_CHARACTERS = 64;

/** 1972-01-01 and 2100-01-01, TAI: before there is no UTC to convert, beyond no ephemeris of the Earth. */
export const EARLIEST_TAI_S = 63_072_000;
export const LATEST_TAI_S = 4_102_444_800;

/** Whether an instant is one that something may be set up at. */
export const isUsableTime = ({ taiS }: Instant): boolean => taiS >= EARLIEST_TAI_S && taiS < LATEST_TAI_S;

/** What a time must be, in words. */
export const TIME_RIGHT =
  'a time from 1972 to 2099: { "taiS": whole seconds since 1970-01-01T00:00:00 TAI, "ps": whole picoseconds, 0 to 999999999999 }, or a text such as "2027-03-01T00:00:00Z" or "2027-03-01T00:00:00 TAI"';

/** A time as it is given: an instant, or text that says its scale (UTC, TAI, GPS or TT; nothing means UTC). */
export type TimeGiven = Instant | string;

const form = instant();

/** A time in what is sent to the server, where a program gives an instant and a person types text. Answers have instants alone. */
export const timeGiven = () =>
  z.custom<TimeGiven>(
    (value) => {
      if (typeof value === 'string') return value.length <= MOST_TIME_CHARACTERS;
      const { success, data } = form.safeParse(value);
      return success && isUsableTime(data);
    },
    { error: TIME_RIGHT },
  );

/** The id of a thing, in a body. */
export const idOf = (what: string) => z.int({ error: `the id of ${what}` }).positive(`the id of ${what}`);

/** A name on one line, at least one character. */
export const setupName = () => line(MOST_NAME_CHARACTERS);

/** A name, or empty where the code says enough. */
export const nameOrEmpty = () =>
  z.union([z.literal(''), line(MOST_NAME_CHARACTERS)], { error: `a text of at most ${MOST_NAME_CHARACTERS} characters on one line` });

/** A note of some lines, perhaps empty. */
export const setupNote = () =>
  z.custom<string>((value) => typeof value === 'string' && value.length <= MOST_NOTE_CHARACTERS && !/[^\P{Cc}\n\t]|\p{Cs}/u.test(value), {
    error: `a text of at most ${MOST_NOTE_CHARACTERS} characters`,
  });

/** A whole number between bounds, both allowed. */
export const wholeNumber = (least: number, most: number) =>
  numberThat(`a whole number from ${least} to ${most}`, (value) => Number.isInteger(value) && value >= least && value <= most);

/** A number with a unit between bounds, both allowed. */
export const between = (least: number, most: number, unit: string) =>
  numberThat(`a number of ${unit} from ${least} to ${most}`, (value) => value >= least && value <= most);

/** An edit of some of the fields, whatever is absent staying as it is, with the version that was seen. At least one field is there. */
export const edit = <T extends z.ZodRawShape>(shape: T) =>
  record({ ...shape, version: version() }).refine((given) => Object.keys(given).length > 1, {
    error: `an edit of at least one field beside "version": ${Object.keys(shape).join(', ')}`,
  });

export const flag = (right: string) => z.boolean({ error: right });

/** Something doubtful about what was accepted. */
export const warning = z.strictObject({ where: z.string(), text: z.string() });

/** What comes back with a thing that was made or changed: what is doubtful about it. */
export const withWarnings = { warnings: z.array(warning) };

export type Warning = z.infer<typeof warning>;
