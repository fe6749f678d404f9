import { type Request } from 'express';

/** The id of a request, which its log line, its problem and its audit entries name. */
export const requestIdOf = ({ id }: Request): string => (typeof id === 'string' ? id : '');
