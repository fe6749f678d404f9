/** Why no connection came about. */
export interface Unreachable {
  readonly why: string;
  /** Whether something answers there that is no server of this protocol. */
  readonly isOther: boolean;
}

const TRY_AGAIN = new Set([403, 408, 429]); // the gate's own when it is full, and those of what may stand before a server

const NO_SUCH_NAME = /^(?:ENOTFOUND|EAI_AGAIN|EAI_NONAME)$/;
const NO_ROUTE = /^(?:ENETUNREACH|EHOSTUNREACH|ENETDOWN)$/;
const TLS = /^(?:EPROTO|ERR_SSL_|ERR_TLS_|CERT_|UNABLE_TO_|DEPTH_ZERO_|SELF_SIGNED_|HOSTNAME_MISMATCH)/;

/**
 * Why a WebSocket could not be opened, in words.
 *
 * @param fault as socket.io-client gives it: the transport's own is in `description`
 * @param origin scheme, host and port that were asked
 */
export function unreachable(fault: object, origin: string): Unreachable {
  const { code, text } = causeOf(fault);
  const keepTrying = (why: string): Unreachable => ({ why, isOther: false });
  const other = (why: string): Unreachable => ({ why, isOther: true });
  if (code === 'ECONNREFUSED') return keepTrying(`${origin} refuses the connection: no server listens there`);
  if (NO_SUCH_NAME.test(code)) return keepTrying(`${origin}: there is no such name`);
  if (NO_ROUTE.test(code)) return keepTrying(`${origin}: no way leads there`);
  if (code === 'ETIMEDOUT') return keepTrying(`${origin} does not answer`);
  if (TLS.test(code)) return other(`${origin}: no secure connection comes about (${text.trim().split('\n')[0] ?? code})`);
  const status = Number(/^Unexpected server response: (\d{3})$/.exec(text)?.[1] ?? 0);
  if (status >= 500 || TRY_AGAIN.has(status)) return keepTrying(`${origin} lets nobody in at this moment (status ${status})`);
  if (status > 0) return other(`${origin} answers, but is no Skewline server (status ${status})`);
  if (code.startsWith('HPE_') || text.startsWith('Invalid ')) return other(`${origin} answers, but is no Skewline server (${text})`);
  return keepTrying(`${origin} cannot be reached${text && ` (${text})`}`);
}

function causeOf(fault: object): { readonly code: string; readonly text: string } {
  const given: unknown = 'description' in fault ? fault.description : undefined;
  const cause: unknown = typeof given === 'object' && given && 'error' in given ? given.error : given;
  if (!(cause instanceof Error)) return { code: '', text: '' };
  const code = 'code' in cause && typeof cause.code === 'string' ? cause.code : '';
  // Where a name has several addresses and none answers, each has its own cause.
  if (cause instanceof AggregateError && cause.errors[0] instanceof Error && cause.message === '')
    return { code, text: cause.errors[0].message };
  return { code, text: cause.message };
}
