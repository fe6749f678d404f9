/** One header of an answer: its name and its value. */
export type Header = readonly [name: string, value: string];

/** What an HTTP request asks, free of what carries it: the same in the thread that took it and in the one that answers it. */
export interface Exchange {
  readonly method: string;
  /** Below /api, without the query. */
  readonly path: string;
  readonly params: Readonly<Record<string, unknown>>;
  readonly query: Readonly<Record<string, unknown>>;
  /** By their names in lower case. */
  readonly headers: Readonly<Record<string, string>>;
  /** The value of a request's header, by its name in lower case. */
  readonly header: (name: string) => string | undefined;
  /** The address of who asks, as the socket or a trusted proxy gives it. */
  readonly ip: string;
  /** Which the log, problems and audit entries name. */
  readonly requestId: string;
  /**
   * The bytes of the body, as they came.
   *
   * @param most how many it may have
   * @throws Refusal 413 above that, 415 when it is compressed, 400 when it does not come whole
   */
  readonly bytes: (most: number) => Promise<Uint8Array>;
  readonly reply: Reply;
}

/** What an answer carries beside its content; the status is that of the route, or of the refusal. */
export interface Reply {
  readonly headers: readonly Header[];
  readonly add: (...header: Header) => void;
}

/** Looks a header up. */
export const headerIn =
  (headers: Exchange['headers']): Exchange['header'] =>
  (name) =>
    Object.hasOwn(headers, name) ? headers[name] : undefined;

/** A reply without headers yet. */
export function newReply(): Reply {
  const headers: Header[] = [];
  return { headers, add: (...header) => void headers.push(header) };
}
