import { afterEach, describe, expect, it, vi } from 'vitest';
import { query, request, requestTagged, whenSignedOut } from './client.ts';
import { ApiError, errorSentence, isAborted, UnreachableError } from './errors.ts';

const calls: { url: string; init: RequestInit }[] = [];
function answer(make: () => Response | Promise<Response>) {
  calls.length = 0;
  vi.stubGlobal('fetch', async (url: string, init: RequestInit) => {
    calls.push({ url, init });
    return make();
  });
}
const json = (status: number, body: unknown, headers: Record<string, string> = {}) =>
  new Response(JSON.stringify(body), { status, headers: { 'content-type': 'application/json', ...headers } });
const fault = async (promise: Promise<unknown>): Promise<unknown> =>
  promise.then(
    () => null,
    (error: unknown) => error,
  );

afterEach(() => vi.unstubAllGlobals());

describe('a request', () => {
  it('sends JSON and reads JSON', async () => {
    answer(() => json(201, { id: 's1' }));
    expect(await request('POST', '/studies', { body: { title: 'A' } })).toEqual({ id: 's1' });
    expect(calls[0]).toMatchObject({
      url: '/api/studies',
      init: { method: 'POST', body: '{"title":"A"}', credentials: 'same-origin' },
    });
  });

  it('sends a question document as it was written', async () => {
    answer(() => json(201, {}));
    await request('POST', '/x', { text: '{"a":12345678901234567890}' });
    expect(calls[0]!.init.body).toBe('{"a":12345678901234567890}');
  });

  it('takes an empty answer', async () => {
    answer(() => new Response(null, { status: 204 }));
    expect(await request('DELETE', '/session')).toBeUndefined();
  });

  it('turns a refusal into an error with code, place and words', async () => {
    answer(() => json(400, { error: { code: 'shape', message: 'expected a title, found nothing', path: '/title' } }));
    const error = await fault(request('POST', '/studies', { body: {} }));
    expect(error).toBeInstanceOf(ApiError);
    expect(error).toMatchObject({ status: 400, code: 'shape', path: '/title' });
    expect(errorSentence(error)).toBe('Expected a title, found nothing.');
  });

  it('tells the session that nobody is signed in any more', async () => {
    const told = vi.fn();
    whenSignedOut(told);
    answer(() => json(401, { error: { code: 'signed-out', message: 'sign in' } }));
    await fault(request('GET', '/studies'));
    expect(told).toHaveBeenCalledOnce();
  });

  it.each([
    ['no answer', () => Promise.reject(new TypeError('failed to fetch'))],
    ['a page of something between', () => new Response('<html>', { status: 502 })],
    ['an error of another shape', () => json(500, { message: 'x' })],
  ])('calls the server away on %s', async (_, make) => {
    answer(make as () => Promise<Response>);
    const error = await fault(request('GET', '/studies'));
    expect(error).toBeInstanceOf(UnreachableError);
    expect(errorSentence(error)).toContain('does not answer');
  });

  it('lets an abort through as such', async () => {
    answer(() => Promise.reject(new DOMException('gone', 'AbortError')));
    expect(isAborted(await fault(request('GET', '/studies')))).toBe(true);
  });
});

describe('a tagged request', () => {
  it('names what it knows and takes “as before” for an answer', async () => {
    const signal = new AbortController().signal;
    answer(() => json(200, { n: 1 }, { etag: '"7"' }));
    expect(await requestTagged('/pool', null, signal)).toEqual({ value: { n: 1 }, etag: '"7"' });
    answer(() => new Response(null, { status: 304 }));
    expect(await requestTagged('/pool', '"7"', signal)).toEqual({ value: null, etag: '"7"' });
    expect(calls[0]!.init.headers).toMatchObject({ 'if-none-match': '"7"' });
  });
});

describe('a query string', () => {
  it('leaves out what is not given', () => {
    expect(query({ after: undefined, limit: 3, questionId: 'a b' })).toBe('?limit=3&questionId=a+b');
    expect(query({ after: undefined })).toBe('');
  });
});
