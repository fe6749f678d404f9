import express, { type Request, type RequestHandler, type Response } from 'express';
import { type Answer } from './answer';
import { headerIn, newReply, type Exchange } from './exchange';
import { unusableRequest } from './refusal';
import { requestIdOf } from './request-id';

/** The exchange that an Express request begins. */
export function exchangeOf(req: Request, res: Response): Exchange {
  const headers = headersOf(req);
  return {
    method: req.method,
    path: req.path,
    params: req.params,
    query: req.query,
    headers,
    header: headerIn(headers),
    ip: req.ip ?? 'unknown',
    requestId: requestIdOf(req),
    bytes: (most) => readBytes(req, res, most),
    reply: newReply(),
  };
}

/** Node joins what comes several times, but for Set-Cookie, which no request has. */
const headersOf = ({ headers }: Request): Record<string, string> =>
  Object.fromEntries(Object.entries(headers).filter((header): header is [string, string] => typeof header[1] === 'string'));

/** Sends an answer by an Express response. */
export function sendAnswer(res: Response, { status, headers, content }: Answer): void {
  for (const [name, value] of headers) res.appendHeader(name, value);
  res.status(status);
  if (content) res.type(content.type).send(content.text);
  else res.end();
}

function readBytes(req: Request, res: Response, limit: number): Promise<Uint8Array> {
  const read: RequestHandler = express.raw({ type: () => true, limit, inflate: false });
  return new Promise((resolve, reject) => {
    void read(req, res, (fault?: unknown) => {
      const body: unknown = req.body;
      if (fault !== undefined) reject(refusalOf(fault, limit));
      else resolve(Buffer.isBuffer(body) ? body : new Uint8Array(0));
    });
  });
}

function refusalOf(fault: unknown, limit: number): Error {
  const status = fault instanceof Error && 'status' in fault ? fault.status : undefined;
  if (status === 413) return unusableRequest(413, `The body must have at most ${limit} bytes.`);
  if (status === 415) return unusableRequest(415, 'The body must not be compressed.');
  return unusableRequest(400, 'The body did not come whole.');
}
