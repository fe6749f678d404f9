import { type ProblemDetails } from '#shared/contract/problem';
import { type Ground } from '../ground';
import { isLostWrite } from '../writer/lost-write';
import { type Exchange, type Header } from './exchange';
import { Refusal } from './refusal';
import { type Served } from './serve';

/** An answer before it is sent: plain data that can cross threads. */
export interface Answer {
  readonly status: number;
  readonly headers: readonly Header[];
  /** JSON; absent where there is no content. */
  readonly content?: { readonly type: 'json' | 'application/problem+json'; readonly text: string };
}

/** What a problem (RFC 9457) says. */
export interface Told {
  readonly status: number;
  readonly title: string;
  /** For the person who asked. */
  readonly detail: string;
  /** The path of the field that cannot be used. */
  readonly where?: string | undefined;
  readonly headers?: Readonly<Record<string, string>>;
}

/** A problem as the answer to a request, whose id stands in the log beside it. */
export function problemAnswer({ status, title, detail, where, headers = {} }: Told, id: string): Answer {
  const problem: ProblemDetails = { type: 'about:blank', title, status, detail, ...(where !== undefined && { where }), id };
  return { status, headers: Object.entries(headers), content: { type: 'application/problem+json', text: JSON.stringify(problem) } };
}

/** What a refusal says. */
export const toldBy = ({ status, title, message, where, headers }: Refusal): Told => ({ status, title, detail: message, where, headers });

/** What is told of our own faults: nothing; the rest is in the log. */
export const INTERNAL_FAULT: Told = {
  status: 500,
  title: 'Internal fault',
  detail: 'The server failed to answer. Ask whoever runs it to look for this id in its log.',
};

/**
 * Answers an exchange by its route: what the handler gives, the refusal that it throws, or a fault of ours, told by its id alone.
 *
 * @throws a lost write, which no answer may hide
 */
export async function answerTo(served: Served, exchange: Exchange, ground: Ground): Promise<Answer> {
  const { reply, requestId } = exchange;
  const withHeaders = (answer: Answer): Answer => ({ ...answer, headers: [...reply.headers, ...answer.headers] });
  try {
    const answer = await served.answer(exchange, ground);
    const { status } = served.route;
    if (answer === undefined) return withHeaders({ status, headers: [] });
    return withHeaders({ status, headers: [], content: { type: 'json', text: JSON.stringify(answer) } });
  } catch (fault) {
    if (fault instanceof Refusal) return withHeaders(problemAnswer(toldBy(fault), requestId));
    if (isLostWrite(fault)) throw fault;
    ground.log.error({ err: fault, requestId }, 'request failed');
    return problemAnswer(INTERNAL_FAULT, requestId);
  }
}
