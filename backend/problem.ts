import { type ErrorRequestHandler, type RequestHandler, type Response } from 'express';
import { type ProblemDetails } from '#shared/contract/problem';
import { Refusal } from './api/refusal';
import { requestIdOf } from './api/request-id';

/**
 * Sends an RFC 9457 problem; `detail` is for the person who asked, `id` stands in the log beside the request, `where` is the path of the
 * field that cannot be used.
 */
export function sendProblem(res: Response, status: number, title: string, detail: string, where?: string): void {
  const problem: ProblemDetails = {
    type: 'about:blank',
    title,
    status,
    detail,
    ...(where !== undefined && { where }),
    id: requestIdOf(res.req),
  };
  res.status(status).type('application/problem+json').json(problem);
}

/** The end of every way that leads nowhere. */
export const notFound: RequestHandler = (req, res) =>
  sendProblem(res, 404, 'Not found', `Nothing is served at ${req.method} ${req.baseUrl}${req.path}.`);

/** Faults of a request are told as they are; of our own faults only the id goes out, the rest into the log. */
export const failed: ErrorRequestHandler = (fault: unknown, req, res, next) => {
  if (res.headersSent) {
    next(fault);
    return;
  }
  if (fault instanceof Refusal) {
    for (const [name, value] of Object.entries(fault.headers)) res.setHeader(name, value);
    sendProblem(res, fault.status, fault.title, fault.message, fault.where);
    return;
  }
  const status = requestFault(fault);
  if (status) {
    sendProblem(res, status, 'Unusable request', 'The request cannot be read: check its address and its headers.');
    return;
  }
  req.log.error({ err: fault }, 'request failed');
  sendProblem(res, 500, 'Internal fault', 'The server failed to answer. Ask whoever runs it to look for this id in its log.');
};

/** The 4xx status that Express and its parsers give a request that they refuse. */
function requestFault(fault: unknown): number | undefined {
  if (!(fault instanceof Error) || !('status' in fault) || typeof fault.status !== 'number') return undefined;
  return fault.status >= 400 && fault.status < 500 ? fault.status : undefined;
}
