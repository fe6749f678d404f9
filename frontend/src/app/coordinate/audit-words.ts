import { type AuditEntry } from '#shared/contract/record-routes';
import { type Scale } from '#shared/time/scales';
import { instantText } from '../instants/instant-parts';
import { serverInstant } from '../instants/server-instant';
import { figureText } from '../ui/figure';

/** What an entry may name, as far as the reader knows it. */
export interface AuditKnown {
  readonly sites: readonly { readonly id: number; readonly code: string }[];
  readonly networks: readonly { readonly id: number; readonly code: string }[];
  readonly scale: Scale;
}

type Details = AuditEntry['details'];

/** What was done, in words: `my-password:changed` as 'my password changed'. */
export const actWords = (action: string): string => action.replaceAll(/[:-]/g, ' ');

/** To what: a site or network by its code where that is known, everything else by its kind and id. */
export function subjectWords({ subjectKind, subjectId }: Pick<AuditEntry, 'subjectKind' | 'subjectId'>, known: AuditKnown): string {
  const named = subjectKind === 'site' ? known.sites : subjectKind === 'network' ? known.networks : [];
  return `${actWords(subjectKind)} ${named.find(({ id }) => String(id) === subjectId)?.code ?? subjectId}`;
}

/** The details of an entry in words, in their order. */
export const detailWords = ({ details }: Pick<AuditEntry, 'details'>, known: AuditKnown): string =>
  Object.entries(details)
    .flatMap(([name, value]) => words(name, value, known) ?? [])
    .join(', ');

/** One detail in words; nothing where it says nothing. */
function words(name: string, value: Details[string], known: AuditKnown): string | undefined {
  switch (name) {
    case 'roleId':
    case 'keyId':
      return `${name === 'roleId' ? 'grant' : 'key'} no. ${JSON.stringify(value)}`;
    case 'siteId': // a role that is held in a whole network has none
      return value === null ? undefined : subjectWords({ subjectKind: 'site', subjectId: JSON.stringify(value) }, known);
    case 'expiresAt':
      return value === null ? 'does not expire' : `expires ${typeof value === 'string' ? timeWords(value, known) : valueWords(value)}`;
    case 'fromTaiS':
    case 'toTaiS': {
      const side = name === 'fromTaiS' ? 'from' : 'to';
      return typeof value === 'number' ? `${side} ${instantText({ taiS: value, ps: 0 }, known.scale, 0)}` : `${side} no end`;
    }
    case 'candidateId':
      return `candidate ${valueWords(value)}`;
    case 'sigmaNs':
      return `standard error ${valueWords(value)} ns`;
    default:
      return `${nameWords(name)} ${valueWords(value)}`;
  }
}

const timeWords = (utc: string, { scale }: AuditKnown): string => instantText(serverInstant(utc), scale, 0);

/** A name of the program's as words: `sessionsEnded` as 'sessions ended'. */
const nameWords = (name: string): string => actWords(name.replaceAll(/[A-Z]/g, (letter) => ` ${letter.toLowerCase()}`));

function valueWords(value: Details[string]): string {
  if (value === null) return 'none';
  if (typeof value === 'boolean') return value ? 'yes' : 'no';
  if (typeof value === 'number') return figureText(value);
  if (typeof value === 'string') return value;
  const parts = Array.isArray(value)
    ? value.map((one) => valueWords(one))
    : Object.entries(value).map(([name, one]) => `${nameWords(name)} ${valueWords(one)}`);
  return parts.length === 0 ? 'none' : parts.join(' and ');
}
