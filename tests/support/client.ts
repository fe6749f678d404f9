/** An answer, read. */
export interface Answer {
  readonly status: number;
  readonly headers: Headers;
  readonly text: string;
  /** The JSON of the body; undefined when it has none. */
  readonly body: unknown;
}

/** How a request is sent where it is not the usual way. */
export interface Sending {
  readonly headers?: Readonly<Record<string, string>>;
  /** In place of JSON. */
  readonly raw?: string | Buffer<ArrayBuffer>;
}

/** A client with cookies of its own, as a browser has them. */
export class Client {
  readonly cookies = new Map<string, string>();

  constructor(private readonly url: string) {}

  get(path: string, sending: Sending = {}): Promise<Answer> {
    return this.send('GET', path, undefined, sending);
  }

  post(path: string, body: unknown = {}, sending: Sending = {}): Promise<Answer> {
    return this.send('POST', path, body, sending);
  }

  patch(path: string, body: unknown, sending: Sending = {}): Promise<Answer> {
    return this.send('PATCH', path, body, sending);
  }

  async send(method: string, path: string, body: unknown, { headers = {}, raw }: Sending = {}): Promise<Answer> {
    const cookie = [...this.cookies].map(([name, value]) => `${name}=${value}`).join('; ');
    const sent = raw ?? (body === undefined ? undefined : JSON.stringify(body));
    const res = await fetch(`${this.url}/api${path}`, {
      method,
      headers: { ...(cookie !== '' && { cookie }), ...(sent !== undefined && { 'content-type': 'application/json' }), ...headers },
      ...(sent !== undefined && { body: sent }),
    });
    for (const line of res.headers.getSetCookie()) {
      const [, name = '', value = ''] = /^([^=]+)=([^;]*)/.exec(line) ?? [];
      if (value === '') this.cookies.delete(name);
      else this.cookies.set(name, value);
    }
    const text = await res.text();
    return { status: res.status, headers: res.headers, text, body: text === '' ? undefined : (JSON.parse(text) as unknown) };
  }
}
