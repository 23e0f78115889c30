/**
 * The demo: an invented research group, made by running the real thing. People are invited and accept by the key
 * in their letter; questions go through the API and are settled by the station. Safe to run again.
 */
import { existsSync, readFileSync, readdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';

const PASSWORD = 'palmette-demo';
const PEOPLE = [
  { email: 'ruben@saltmarsh.example', name: 'Ruben Aalto', role: 'researcher' },
  { email: 'mei@saltmarsh.example', name: 'Mei Castellan', role: 'researcher' },
  { email: 'tova@saltmarsh.example', name: 'Tova Lindqvist', role: 'reader' },
];

const pretzel = (...a) => ({ kind: 'montesinos', pretzel: a, orientation: 'definite' });
const fraction = (p, q, orientation = 'chain') => ({ kind: 'fraction', p, q, orientation });
const STUDIES = [
  {
    by: 'ruben@saltmarsh.example',
    title: 'Pretzels with a cancelling pair',
    members: [
      ['mei@saltmarsh.example', 'coauthor'],
      ['tova@saltmarsh.example', 'reader'],
    ],
    note: 'The leg 15 is the interesting one: it embeds, and that proves nothing yet.',
    questions: [
      { title: 'P(3, 5, −7) at its rank', source: pretzel(3, 5, -7), target: { excess: 0 }, scope: 'all', tests: [] },
      {
        title: 'P(3, 5, −7), the least n',
        source: pretzel(3, 5, -7),
        target: { least: {} },
        scope: 'all',
        tests: ['complement'],
      },
      {
        title: 'P(3, 3, −15) at its rank',
        source: pretzel(3, 3, -15),
        target: { excess: 0 },
        scope: 'all',
        tests: ['cubiquity', 'pair'],
      },
      {
        title: 'Four strands 2, 3, −3, −2',
        source: pretzel(2, 3, -3, -2),
        target: { excess: 0 },
        scope: 'all',
        tests: ['pair'],
      },
      {
        title: 'P(5, 7, −13), one way into rank + 1',
        source: pretzel(5, 7, -13),
        target: { excess: 1 },
        scope: 'one',
        tests: [],
      },
    ],
  },
  {
    by: 'mei@saltmarsh.example',
    title: 'Chains, seen from both sides',
    members: [['ruben@saltmarsh.example', 'coauthor']],
    note: 'Every chain is asked twice, with its dual.',
    questions: [
      { title: '17/5, the least n', source: fraction(17, 5), target: { least: {} }, scope: 'all', tests: [] },
      {
        title: '25/2 at its rank',
        source: fraction(25, 2),
        target: { excess: 0 },
        scope: 'all',
        tests: ['metaboliser'],
      },
      {
        title: '25/2, the dual chain',
        source: fraction(25, 2, 'dual'),
        target: { excess: 0 },
        scope: 'all',
        tests: [],
      },
      {
        title: 'E6 in any Z^n',
        source: {
          kind: 'tree',
          vertices: ['a', 'b', 'c', 'd', 'e', 'f'].map((name) => ({ name, weight: -2 })),
          edges: [
            ['a', 'b'],
            ['b', 'c'],
            ['c', 'd'],
            ['d', 'e'],
            ['c', 'f'],
          ],
        },
        target: { any: true },
        scope: 'all',
        tests: [],
      },
      {
        title: 'Five chains of weight −5, waiting',
        source: { kind: 'sum', of: Array.from({ length: 3 }, () => fraction(115, 24)) },
        target: { excess: 3 },
        scope: 'all',
        tests: [],
        hold: true,
        budget: { cpuSeconds: 3600 },
      },
    ],
  },
];

/** A person's view of the API: a cookie of their own. */
function client(url) {
  let cookie = '';
  return async (method, path, body) => {
    const answer = await fetch(`${url}/api${path}`, {
      method,
      headers: {
        ...(body === undefined ? {} : { 'content-type': 'application/json' }),
        ...(cookie === '' ? {} : { cookie }),
        origin: url,
      },
      ...(body === undefined ? {} : { body: JSON.stringify(body) }),
    });
    cookie = answer.headers.getSetCookie()[0]?.split(';')[0] ?? cookie;
    const text = await answer.text();
    if (!answer.ok)
      throw Object.assign(new Error(`${method} ${path}: ${answer.status} ${text}`), { status: answer.status });
    return text === '' ? null : JSON.parse(text);
  };
}

async function poll(what, look) {
  for (const deadline = Date.now() + 120_000; Date.now() < deadline;) {
    const seen = await look();
    if (seen) return seen;
    await new Promise((resolve) => setTimeout(resolve, 250));
  }
  throw new Error(`${what} did not happen within two minutes`);
}

/** The key in the newest letter to an address. */
function keyFor(folder, email) {
  if (!existsSync(folder)) return null;
  for (const file of readdirSync(folder)
    .filter((f) => f.endsWith('.eml'))
    .sort()
    .reverse()) {
    const text = readFileSync(join(folder, file), 'utf8').replaceAll('=\r\n', '').replaceAll('=3D', '=');
    const key = text.includes(email) ? /key=([A-Za-z0-9_-]{20,})|\/invitation\/([A-Za-z0-9_-]{20,})/.exec(text) : null;
    if (key !== null) return key[1] ?? key[2];
  }
  return null;
}

export async function makeDemo({ url, letters, state, admin, say }) {
  const mark = join(state, 'demo-made');
  if (!existsSync(mark)) {
    say('Making the demo: people, studies and questions, settled by the station');
    const asAdmin = client(url);
    await asAdmin('POST', '/session', admin);
    for (const person of PEOPLE) {
      await asAdmin('POST', '/people/invitations', person);
      const key = await poll(`the letter to ${person.email}`, () => keyFor(letters, person.email));
      await client(url)('POST', '/invitations/accept', { key, password: PASSWORD });
    }
    for (const study of STUDIES) await makeStudy(url, study);
    writeFileSync(mark, new Date().toISOString());
  }
  say('');
  say('Demo accounts (invented), password of each: palmette-demo');
  say(`  ${admin.email}  admin`);
  for (const { email, role } of PEOPLE) say(`  ${email}  ${role}`);
}

async function makeStudy(url, study) {
  const api = client(url);
  await api('POST', '/session', { email: study.by, password: PASSWORD });
  const { id } = await api('POST', '/studies', { title: study.title });
  for (const [email, access] of study.members) await api('PUT', `/studies/${id}/members`, { email, access });
  await api('POST', `/studies/${id}/notes`, { text: study.note });
  const asked = [];
  for (const { hold, ...question } of study.questions) {
    const made = await api('POST', `/studies/${id}/questions`, { format: 'palmette.question/1', ...question });
    if (hold) await api('POST', `/questions/${made.id}/hold`);
    else asked.push(made.id);
  }
  await poll(`settling the questions of ${study.title}`, async () => {
    const states = await Promise.all(asked.map(async (q) => (await api('GET', `/questions/${q}`)).state));
    return states.every((s) => ['settled', 'spent', 'broken', 'searching'].includes(s));
  });
}
