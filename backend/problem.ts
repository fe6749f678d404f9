import { type ErrorRequestHandler, type RequestHandler, type Response } from 'express';
import { INTERNAL_FAULT, problemAnswer, toldBy, type Told } from './api/answer';
import { sendAnswer } from './api/express-exchange';
import { Refusal } from './api/refusal';
import { requestIdOf } from './api/request-id';

/** Sends a problem (RFC 9457) as the answer to a request. */
export const sendProblem = (res: Response, told: Told): void => sendAnswer(res, problemAnswer(told, requestIdOf(res.req)));

/** The end of every way that leads nowhere. */
export const notFound: RequestHandler = (req, res) =>
  sendProblem(res, { status: 404, title: 'Not found', detail: `Nothing is served at ${req.method} ${req.baseUrl}${req.path}.` });

/** Faults of a request are told as they are; of our own faults only the id goes out, the rest into the log. */
export const failed: ErrorRequestHandler = (fault: unknown, req, res, next) => {
  if (res.headersSent) {
    next(fault);
    return;
  }
  if (fault instanceof Refusal) {
    sendProblem(res, toldBy(fault));
    return;
  }
  const status = requestFault(fault);
  if (status) {
    sendProblem(res, { status, title: 'Unusable request', detail: 'The request cannot be read: check its address and its headers.' });
    return;
  }
  req.log.error({ err: fault }, 'request failed');
  sendProblem(res, INTERNAL_FAULT);
};

/** The 4xx status that Express and its parsers give a request that they refuse. */
function requestFault(fault: unknown): number | undefined {
  if (!(fault instanceof Error) || !('status' in fault) || typeof fault.status !== 'number') return undefined;
  return fault.status >= 400 && fault.status < 500 ? fault.status : undefined;
}
