/** The API from outside: refusals with their places, roles, access, idempotency, sessions, OpenAPI. Real server, real PostgreSQL. */
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { testDatabase, type TestDatabase } from '../store/test-database.ts';
import { ApiFault, openApi, signIn, type Api } from '../stack/api-client.ts';
import { ADMIN, lettersIn, startStack, until, type Stack } from '../stack/stack.ts';

let database: TestDatabase;
let stack: Stack;
let admin: Api;
let study: string;

beforeAll(async () => {
  database = await testDatabase();
  stack = await startStack(database);
  // letters leave through a station
  await stack.startStation('only', 1);
  admin = await signIn(stack.url, ADMIN);
  study = (await admin.post<{ id: string }>('/studies', { title: 'API' })).id;
});
afterAll(async () => {
  await stack?.stop();
  await database?.drop();
});

async function fault(
  call: Promise<unknown>,
): Promise<{ status: number; code?: string; path?: string; message?: string }> {
  try {
    await call;
  } catch (error) {
    if (error instanceof ApiFault) return { status: error.status, ...error.body.error };
    throw error;
  }
  throw new Error('was not refused');
}

async function invite(name: string, role: string): Promise<Api> {
  const email = `${name}@api.example`;
  await admin.post('/people/invitations', { email, name, role });
  const key = await until(
    `the letter to ${name}`,
    () =>
      /invitation\/([A-Za-z0-9_-]{20,})/.exec(
        lettersIn(stack.letters).find((l) => l.text.includes(email))?.text ?? '',
      )?.[1],
    60,
  );
  const anybody = openApi(stack.url);
  expect(await anybody.get(`/keys/${key}`)).toMatchObject({ purpose: 'invitation', email });
  await anybody.post('/invitations/accept', { key, password: 'a-long-password' });
  expect((await fault(anybody.post('/invitations/accept', { key, password: 'a-long-password' }))).status).toBe(404);
  return signIn(stack.url, { email, password: 'a-long-password' });
}

const question = (source: unknown, more: object = {}) => ({
  format: 'palmette.question/1',
  source,
  target: { excess: 0 },
  scope: 'all',
  ...more,
});
const post = (body: unknown, headers?: Record<string, string>) =>
  admin.post<{ id: string; state: string }>(`/studies/${study}/questions`, body, headers);
const matrix = (rows: unknown) => question({ kind: 'matrix', rows });
const vertex = (name: string, weight: unknown = -2) => ({ name, weight });
const tree = (vertices: unknown[], edges: unknown[]) => question({ kind: 'tree', vertices, edges });

describe('bad input is refused with path, expectation and finding', () => {
  it.each<[string, unknown, string, RegExp]>([
    [
      'not symmetric',
      matrix([
        [2, 1],
        [0, 2],
      ]),
      '/source/rows/1/0',
      /symmetric.*found 0/,
    ],
    ['ragged', matrix([[2, -1], [-1]]), '/source/rows/1', /1 entries, expected 2/],
    [
      'indefinite',
      matrix([
        [1, 0],
        [0, -1],
      ]),
      '/source',
      /signature \(1, 1\)/,
    ],
    [
      'a fraction',
      '{"format":"palmette.question/1","source":{"kind":"matrix","rows":[[1.5]]},"target":{"dimension":1}}',
      '/source/rows/0/0',
      /found 1\.5/,
    ],
    [
      'an exponent',
      '{"format":"palmette.question/1","source":{"kind":"matrix","rows":[[1e3]]},"target":{"dimension":1}}',
      '/source/rows/0/0',
      /found 1e3/,
    ],
    [
      'NaN',
      '{"format":"palmette.question/1","source":{"kind":"matrix","rows":[[NaN]]},"target":{"dimension":1}}',
      '/source/rows/0/0',
      /NaN/,
    ],
    [
      'too big for a number',
      '{"format":"palmette.question/1","source":{"kind":"matrix","rows":[[9007199254740993]]},"target":{"dimension":1}}',
      '/source/rows/0/0',
      /send it as the string/,
    ],
    ['too many digits', matrix([['9'.repeat(1001)]]), '/source/rows/0/0', /at most 1000 digits, found 1001/],
    [
      'beyond the rank',
      matrix(Array.from({ length: 2501 }, () => [0])),
      '/source/rows',
      /at most 2500 rows, found 2501/,
    ],
    ['no rows', matrix([]), '/source/rows', /at least one row/],
    ['unknown vertex', tree([vertex('a')], [['a', 'b']]), '/source/edges/0/1', /"b"/],
    [
      'doubled edge',
      tree(
        [vertex('a'), vertex('b')],
        [
          ['a', 'b'],
          ['b', 'a'],
        ],
      ),
      '/source/edges/1',
      /again/,
    ],
    ['self loop', tree([vertex('a')], [['a', 'a']]), '/source/edges/0', /loop/],
    ['p/q not coprime', question({ kind: 'fraction', p: 6, q: 4 }), '/source/q', /common factor.*2/],
    ['zero slope', question({ kind: 'montesinos', slopes: [[0, 3]] }), '/source/slopes/0/0', /found 0/],
    ['unknown key', { ...question({ kind: 'fraction', p: 5, q: 2 }), colour: 'red' }, '/colour', /unknown key/],
    ['wrong type', question({ kind: 'tree', vertices: 7, edges: [] }), '/source/vertices', /expected a list, found 7/],
    ['a doubled key', '{"format":"palmette.question/1","format":"palmette.question/1"}', '/format', /twice/],
    ['no JSON', 'hello', '', /JSON/],
    ['no body', '', '', /JSON/],
  ])('%s', async (_name, body, path, message) => {
    const found = await fault(post(body));
    expect(found.status).toBeGreaterThanOrEqual(400);
    expect(found.status).toBeLessThan(500);
    expect({ path: found.path, message: found.message }).toEqual({ path, message: expect.stringMatching(message) });
    expect((await fetch(`${stack.url}/api/health`)).status).toBe(200);
  });

  it('a body beyond the limit is refused and the server stays up', async () => {
    expect((await fault(admin.post('/studies', `{"title":"${'x'.repeat(300_000)}"}`))).status).toBe(413);
    expect(await admin.get('/session')).toMatchObject({ person: { email: ADMIN.email } });
  });

  it('unknown addresses and ids are not found', async () => {
    for (const path of [
      '/nowhere',
      '/questions/00000000-0000-4000-8000-000000000000',
      '/questions/no-uuid',
      `/studies/${'a'.repeat(60)}`,
    ])
      expect(await fault(admin.get(path))).toMatchObject({ status: 404, code: 'not-found' });
  });
});

describe('questions', () => {
  it('honours an Idempotency-Key: the same body is the same question, another is a conflict', async () => {
    const key = { 'idempotency-key': 'once-4711' };
    const first = await post(question({ kind: 'fraction', p: 5, q: 2 }), key);
    const again = await post(question({ kind: 'fraction', p: 5, q: 2 }), key);
    expect(again.id).toBe(first.id);
    expect(await fault(post(question({ kind: 'fraction', p: 7, q: 2 }), key))).toMatchObject({
      status: 409,
      code: 'conflict',
    });
  });

  it('answers If-None-Match with 304 and serves the certificate byte for byte', async () => {
    const { id } = await post(question({ kind: 'fraction', p: 25, q: 2 }));
    await until(
      'it is settled',
      async () => (await admin.get<{ state: string }>(`/questions/${id}`)).state === 'settled',
    );
    const token = (await admin.post<{ token: string }>('/account/tokens', { name: 'script' })).token;
    const get = (headers: Record<string, string>) =>
      fetch(`${stack.url}/api/questions/${id}`, { headers: { authorization: `Bearer ${token}`, ...headers } });
    const etag = (await get({})).headers.get('etag')!;
    expect((await get({ 'if-none-match': etag })).status).toBe(304);
    const certificate = await openApi(stack.url, token).text(`/questions/${id}/certificate`);
    expect(JSON.parse(certificate)).toMatchObject({
      format: 'palmette.certificate/1',
      claim: { verdict: 'embeds', total: '8' },
    });
  });

  it('a held question can be resumed and withdrawn, not twice', async () => {
    const { id } = await post(
      question(
        { kind: 'sum', of: Array.from({ length: 4 }, () => ({ kind: 'fraction', p: 115, q: 24 })) },
        { target: { excess: 3 }, budget: { cpuSeconds: 600 } },
      ),
    );
    expect(await admin.post(`/questions/${id}/hold`)).toMatchObject({ state: 'held' });
    expect(await admin.post(`/questions/${id}/resume`)).toMatchObject({
      state: expect.stringMatching(/waiting|searching/),
    });
    expect(await admin.post(`/questions/${id}/withdraw`)).toMatchObject({ state: 'withdrawn', verdict: 'open' });
    expect(await fault(admin.post(`/questions/${id}/resume`))).toMatchObject({ status: 409, code: 'state' });
  });
});

describe('who may do what', () => {
  it('nobody without a session, a reader only looks, a stranger sees nothing', async () => {
    const nobody = openApi(stack.url);
    for (const path of ['/studies', '/pool', '/account', '/people'])
      expect(await fault(nobody.get(path))).toMatchObject({ status: 401, code: 'signed-out' });
    const reader = await invite('reader', 'reader');
    const other = await invite('other', 'researcher');
    expect(await fault(reader.post('/studies', { title: 'mine' }))).toMatchObject({ status: 403, code: 'forbidden' });
    expect((await fault(reader.get(`/studies/${study}`))).status).toBe(404);
    await admin.put(`/studies/${study}/members`, { email: 'reader@api.example', access: 'reader' });
    expect(await reader.get(`/studies/${study}`)).toMatchObject({ access: 'reader' });
    expect(
      (await fault(reader.post(`/studies/${study}/questions`, question({ kind: 'fraction', p: 5, q: 2 })))).status,
    ).toBe(403);
    expect((await fault(other.get(`/studies/${study}/questions`))).status).toBe(404);
    for (const path of ['/people', '/stations', '/audit', '/letters', '/usage'])
      expect((await fault(other.get(path))).status).toBe(403);
  });

  it('a role that changes bites at the next request, and a deactivated person is out', async () => {
    const late = await invite('late', 'researcher');
    const { items } = await admin.get<{ items: { id: string; email: string }[] }>('/people');
    const { id } = items.find((p) => p.email === 'late@api.example')!;
    await late.post('/studies', { title: 'before' });
    await admin.patch(`/people/${id}`, { active: false });
    expect((await fault(late.get('/studies'))).status).toBe(401);
    expect((await fault(signIn(stack.url, { email: 'late@api.example', password: 'a-long-password' }))).status).toBe(
      401,
    );
  });

  it('a change from another site is refused although the cookie is there', async () => {
    const response = await fetch(`${stack.url}/api/session`, {
      method: 'POST',
      headers: { origin: 'https://elsewhere.example', 'content-type': 'application/json' },
      body: JSON.stringify(ADMIN),
    });
    expect(response.status).toBe(403);
  });

  it('a wrong password and an unknown e-mail are told in the same words', async () => {
    const wrong = await fault(signIn(stack.url, { email: ADMIN.email, password: 'not this one' }));
    const unknown = await fault(signIn(stack.url, { email: 'nobody@api.example', password: 'not this one' }));
    expect(unknown).toEqual(wrong);
    expect(wrong).toMatchObject({ status: 401, code: 'wrong-password' });
  });

  it('guessing is slowed down for the e-mail that is guessed at, not for others', async () => {
    const guess = () => fault(signIn(stack.url, { email: 'guessed@api.example', password: 'guess' }));
    const codes = new Set<string>();
    for (let i = 0; i < 25; i += 1) codes.add((await guess()).code ?? '');
    expect([...codes].sort()).toEqual(['too-many', 'wrong-password']);
    await signIn(stack.url, ADMIN);
  });

  it('a revoked token is worth nothing', async () => {
    const made = await admin.post<{ id: string; token: string }>('/account/tokens', { name: 'short-lived' });
    const script = openApi(stack.url, made.token);
    expect(await script.get('/session')).toMatchObject({ person: { email: ADMIN.email } });
    await admin.delete(`/account/tokens/${made.id}`);
    expect((await fault(script.get('/studies'))).status).toBe(401);
  });
});

describe('the published document', () => {
  it('is OpenAPI 3.1 and names every route with its refusals', async () => {
    const document = await admin.get<{
      openapi: string;
      paths: Record<string, Record<string, { responses: Record<string, unknown> }>>;
    }>('/openapi.json');
    expect(document.openapi).toBe('3.1.0');
    for (const [path, methods] of [
      ['/session', ['get', 'post', 'delete']],
      ['/studies/{id}/questions', ['get', 'post']],
      ['/questions/{id}/extend', ['post']],
      ['/people/{id}/allowance', ['put']],
    ] as const) {
      expect(Object.keys(document.paths[path]!).sort()).toEqual([...methods].sort());
    }
    for (const methods of Object.values(document.paths))
      for (const one of Object.values(methods)) expect(one.responses).toHaveProperty('default');
  });

  it('health says when a station was last heard', async () => {
    expect(await openApi(stack.url).get('/health')).toMatchObject({
      database: true,
      queue: true,
      stations: 1,
      stationHeardAt: expect.any(String),
    });
  });
});
