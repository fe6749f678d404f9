import { HttpErrorResponse } from '@angular/common/http';
import { ApiProblem } from './api-problem';

const WORDS: Readonly<Record<number, string>> = {
  0: 'The server does not answer. Check that it runs and that this device is connected.',
  429: 'Too many attempts.',
  503: 'The server is busy.',
};

/**
 * Makes a problem with a clear sentence of a failed request.
 *
 * @param fault what the HTTP client threw
 * @returns the server's own sentence where the answer is an RFC 9457 problem, with how long to wait where it says so
 */
export function readFault(fault: unknown): ApiProblem {
  if (!(fault instanceof HttpErrorResponse)) {
    const text = fault instanceof Error ? fault.message : String(fault);
    return new ApiProblem({ status: 0, text });
  }
  const { status } = fault;
  const { detail, where, id } = fields(fault.error);
  const text = typeof detail === 'string' ? detail : (WORDS[status] ?? `The server answered with status ${status}.`);
  const waitS = Number(fault.headers.get('Retry-After'));
  return new ApiProblem({
    status,
    text: waitS > 0 && !/\d+ s/.test(text) ? `${text} Try again in ${waitS} s.` : text,
    ...(typeof where === 'string' && { where }),
    ...(typeof id === 'string' && { id }),
  });
}

const fields = (value: unknown): Readonly<Record<string, unknown>> => (typeof value === 'object' && value !== null ? { ...value } : {});
