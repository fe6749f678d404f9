import * as z from 'zod';

/** When a role ends, as a box for date and time of day in UTC takes it; empty for until it is taken away. */
export const roleEnd = () => z.string().regex(/^(?:|\d{4}-\d\d-\d\dT\d\d:\d\d)$/, 'a day and a time of day in UTC, or nothing');

/** The end as it crosses the wire. */
export const endOf = (typed: string): string | null => (typed === '' ? null : `${typed}:00.000Z`);

/** The end as the box takes it, to the minute. */
export const typedEnd = (end: string | null): string => end?.slice(0, 'YYYY-MM-DDTHH:MM'.length) ?? '';
