import * as z from 'zod';
import { COINCIDENCE_CLASSES, coincidenceBrief, coincidenceInFull } from './coincidence';
import { idsText, isUsableSpan, partAt, partQuery, SPAN_FAULT, spanQuery, wordText } from './list-query';
import { record } from './leaves';
import { idText } from './page';
import { route } from './routes';

/** What coincidences can be sorted by; by turning speed or amplitude the list holds those that have one. */
export const COINCIDENCE_SORTS = ['time', 'fold', 'margin', 'span', 'turning', 'amplitude'] as const;
export type CoincidenceSort = (typeof COINCIDENCE_SORTS)[number];

/** Most sites that a list can be kept to at once. */
export const MOST_SITES_ASKED = 12;

const FOLD_RIGHT = 'a fold from 2 to 99: coincidences of at least so many sites';
const NAME_RIGHT = '4 to 64 of the first digits of a name, 0 to 9 and a to f';

/** Coincidences in force; `siteIds` keeps those in which all of these sites take part, `name` those whose name begins so. */
export const COINCIDENCE_ROUTES = {
  listCoincidences: route('GET', '/networks/:networkId/coincidences', {
    policy: 'coincidence:list',
    params: z.strictObject({ networkId: idText }),
    query: record({
      ...partQuery,
      ...spanQuery,
      sort: wordText(...COINCIDENCE_SORTS),
      class: wordText(...COINCIDENCE_CLASSES),
      leastFold: z
        .string({ error: FOLD_RIGHT })
        .regex(/^(?:[2-9]|[1-9]\d)$/, FOLD_RIGHT)
        .transform(Number)
        .optional(),
      siteIds: idsText(MOST_SITES_ASKED).optional(),
      ruleId: idText.optional(),
      state: wordText('open', 'final'),
      name: z
        .string({ error: NAME_RIGHT })
        .regex(/^[0-9a-f]{4,64}$/, NAME_RIGHT)
        .optional(),
    }).refine(isUsableSpan, SPAN_FAULT),
    answer: partAt(coincidenceBrief),
  }),
  readCoincidence: route('GET', '/coincidences/:coincidenceId', {
    policy: 'coincidence:read',
    params: z.strictObject({ coincidenceId: idText }),
    answer: coincidenceInFull,
  }),
};

export type CoincidenceQuery = z.infer<(typeof COINCIDENCE_ROUTES)['listCoincidences']['query']>;
