import { type AuditEntry } from '#shared/contract/record-routes';

/** What was done, in words: `my-password:changed` as 'my password changed'. */
export const actWords = (action: string): string => action.replaceAll(/[:-]/g, ' ');

/** The details of an entry as 'name value' pairs in their order; what is null or nested is told as JSON. */
export const detailWords = ({ details }: Pick<AuditEntry, 'details'>): string =>
  Object.entries(details)
    .map(([name, value]) => `${name} ${typeof value === 'string' ? value : JSON.stringify(value)}`)
    .join(', ');
