/** A person's view of the API in tests: signs in once, then JSON in and out with the cookie. */
export class ApiFault extends Error {
  override readonly name = 'ApiFault';
  constructor(
    readonly status: number,
    readonly body: { error?: { code: string; message: string; path?: string } },
    what: string,
  ) {
    super(`${what}: ${status} ${JSON.stringify(body)}`);
  }
}

export interface Api {
  get<T>(path: string): Promise<T>;
  post<T>(path: string, body?: unknown, headers?: Readonly<Record<string, string>>): Promise<T>;
  put<T>(path: string, body: unknown): Promise<T>;
  patch<T>(path: string, body: unknown): Promise<T>;
  delete<T>(path: string): Promise<T>;
  /** The certificate's text. */
  text(path: string): Promise<string>;
}

export function openApi(url: string, token?: string): Api {
  let cookie = '';
  async function call(
    method: string,
    path: string,
    body?: unknown,
    headers: Readonly<Record<string, string>> = {},
  ): Promise<string> {
    const response = await fetch(`${url}/api${path}`, {
      method,
      headers: {
        origin: url,
        ...(token === undefined ? {} : { authorization: `Bearer ${token}` }),
        ...(cookie === '' ? {} : { cookie }),
        ...(body === undefined ? {} : { 'content-type': 'application/json' }),
        ...headers,
      },
      ...(body === undefined ? {} : { body: typeof body === 'string' ? body : JSON.stringify(body) }),
    });
    cookie = response.headers.getSetCookie()[0]?.split(';')[0] ?? cookie;
    const text = await response.text();
    if (!response.ok) throw new ApiFault(response.status, text === '' ? {} : JSON.parse(text), `${method} ${path}`);
    return text;
  }
  const json = <T>(text: string): T => (text === '' ? undefined : JSON.parse(text)) as T;
  return {
    get: async (path) => json(await call('GET', path)),
    post: async (path, body, headers) => json(await call('POST', path, body, headers)),
    put: async (path, body) => json(await call('PUT', path, body)),
    patch: async (path, body) => json(await call('PATCH', path, body)),
    delete: async (path) => json(await call('DELETE', path)),
    text: (path) => call('GET', path),
  };
}

export async function signIn(url: string, who: { readonly email: string; readonly password: string }): Promise<Api> {
  const api = openApi(url);
  await api.post('/session', { email: who.email, password: who.password });
  return api;
}
