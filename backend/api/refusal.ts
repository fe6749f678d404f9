import { type Problem } from '#shared/outcome';

/** What a refusal may say beside its sentence. */
interface More {
  /** The path of the field that cannot be used. */
  readonly where?: string;
  readonly headers?: Readonly<Record<string, string>>;
}

/** A request that is refused: thrown, so that whatever a transaction had done is undone, and told as a problem (RFC 9457). */
export class Refusal extends Error {
  readonly where: string | undefined;
  readonly headers: Readonly<Record<string, string>>;

  constructor(
    readonly status: number,
    readonly title: string,
    detail: string,
    { where, headers = {} }: More = {},
  ) {
    super(detail);
    this.where = where;
    this.headers = headers;
  }
}

/** What is absent, and what must look so: the same words for both. */
export const absent = (): Refusal => new Refusal(404, 'Not found', 'There is no such thing, or it is not yours to see.');

export const forbidden = (): Refusal => new Refusal(403, 'Not allowed', 'None of your roles there lets you do this.');

export const signInFirst = (): Refusal =>
  new Refusal(401, 'Not signed in', 'Sign in to do this; a session whose ten minutes are over is renewed by POST /api/refresh.');

export const stale = (): Refusal =>
  new Refusal(409, 'Changed meanwhile', 'Someone changed this after you read it: read it again, and decide anew.', { where: 'version' });

export const conflict = (detail: string): Refusal => new Refusal(409, 'Not possible now', detail);

/** A code that another thing of its kind has already. */
export const codeTaken = (code: string, what: string): Refusal =>
  new Refusal(409, 'Not possible now', `code is "${code}", which another ${what} has already; it must be a code of its own.`, {
    where: 'code',
  });

const UNUSABLE = 'Unusable request';

/** A field that cannot be used; `text` goes on from the field's path. */
export const unusable = ({ where, text }: Pick<Problem, 'where' | 'text'>): Refusal =>
  new Refusal(400, UNUSABLE, where === '' ? text : `${where} ${text}`, where === '' ? {} : { where });

/** Something about the request that is no field of it. */
export const unusableRequest = (status: number, detail: string): Refusal => new Refusal(status, UNUSABLE, detail);

/** To be tried again after some seconds. */
export const later = (status: 429 | 503, title: string, detail: string, afterS: number): Refusal =>
  new Refusal(status, title, detail, { headers: { 'Retry-After': String(afterS) } });
