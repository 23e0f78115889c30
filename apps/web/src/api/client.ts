/** One request to the API: JSON out, JSON in, refusals as errors. Pages use the modules beside this one. */
import type { ErrorBody } from '@palmette/contracts';
import { ApiError, isAborted, UnreachableError } from './errors.ts';

export interface RequestOptions {
  readonly signal?: AbortSignal;
  /** A value that becomes JSON, or text that is sent as it stands. */
  readonly body?: unknown;
  readonly text?: string;
  readonly headers?: Readonly<Record<string, string>>;
}

/** An answer that may be “as before”: then `value` is null. */
export interface Tagged<T> {
  readonly value: T | null;
  readonly etag: string | null;
}

type Method = 'GET' | 'POST' | 'PUT' | 'PATCH' | 'DELETE';
let onSignedOut: () => void = () => undefined;

/** Told when the server no longer knows who is asking. One listener: the session. */
export function whenSignedOut(listener: () => void): void {
  onSignedOut = listener;
}

async function send(method: Method, path: string, options: RequestOptions): Promise<Response> {
  const hasBody = options.text !== undefined || options.body !== undefined;
  let response: Response;
  try {
    response = await fetch(`/api${path}`, {
      method,
      credentials: 'same-origin',
      cache: 'no-store',
      headers: {
        accept: 'application/json',
        ...(hasBody ? { 'content-type': 'application/json' } : {}),
        ...options.headers,
      },
      ...(hasBody ? { body: options.text ?? JSON.stringify(options.body) } : {}),
      ...(options.signal === undefined ? {} : { signal: options.signal }),
    });
  } catch (error) {
    if (isAborted(error)) throw error;
    throw new UnreachableError(error);
  }
  if (!response.ok && response.status !== 304) throw await refusalOf(response);
  return response;
}

async function refusalOf(response: Response): Promise<Error> {
  let body: ErrorBody;
  try {
    body = (await response.json()) as ErrorBody;
  } catch (error) {
    if (isAborted(error)) return error as Error;
    return new UnreachableError(error);
  }
  if (typeof body?.error?.code !== 'string') return new UnreachableError();
  const { code, message, path } = body.error;
  if (code === 'signed-out') onSignedOut();
  return new ApiError(response.status, code, message, path);
}

async function json<T>(response: Response): Promise<T> {
  if (response.status === 204) return undefined as T;
  const text = await response.text();
  return (text === '' ? undefined : JSON.parse(text)) as T;
}

/**
 * @param path below `/api`
 * @throws ApiError if the server refuses, UnreachableError if it does not answer, AbortError if `signal` fired
 */
export async function request<T>(method: Method, path: string, options: RequestOptions = {}): Promise<T> {
  return json<T>(await send(method, path, options));
}

/** A GET that names what is already known and gets nothing if that still holds. */
export async function requestTagged<T>(path: string, etag: string | null, signal: AbortSignal): Promise<Tagged<T>> {
  const response = await send('GET', path, { signal, headers: etag === null ? {} : { 'if-none-match': etag } });
  if (response.status === 304) return { value: null, etag };
  return { value: await json<T>(response), etag: response.headers.get('etag') };
}

/** The bytes of an answer. */
export async function requestBytes(path: string, signal: AbortSignal): Promise<Uint8Array> {
  const response = await send('GET', path, { signal, headers: { accept: '*/*' } });
  return new Uint8Array(await response.arrayBuffer());
}

/** A query string from what is given; what is undefined is left out. */
export function query(values: Readonly<Record<string, string | number | undefined>>): string {
  const given = Object.entries(values).filter(([, value]) => value !== undefined && value !== '');
  return given.length === 0 ? '' : `?${new URLSearchParams(given.map(([k, v]) => [k, String(v)]))}`;
}
