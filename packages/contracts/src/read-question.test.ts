import { describe, expect, it } from 'vitest';
import { canonicalQuestion, readQuestion } from './read-question.ts';
import { Refusal } from './errors.ts';

const doc = (source: string, target = '{"dimension":3}', more = '') =>
  `{"format":"palmette.question/1","source":${source},"target":${target},"scope":"all"${more}}`;
const a2 = '{"kind":"matrix","rows":[[2,-1],[-1,2]]}';

function refusal(text: string): { code: string; path: string | undefined; message: string } {
  try {
    readQuestion(text);
  } catch (error) {
    if (error instanceof Refusal) return { code: error.code, path: error.path, message: error.message };
    throw error;
  }
  throw new Error(`not refused: ${text}`);
}

describe('readQuestion', () => {
  it('reads a matrix question and fills the defaults', () => {
    const q = readQuestion(doc(a2));
    expect(q.scope).toBe('all');
    expect(canonicalQuestion(q)).toEqual({
      format: 'palmette.question/1',
      source: {
        kind: 'matrix',
        rows: [
          [2, -1],
          [-1, 2],
        ],
      },
      target: { dimension: 3 },
      scope: 'all',
      tests: [],
    });
  });

  it('gives two spellings of one number the same canonical form', () => {
    const q = canonicalQuestion(readQuestion(doc('{"kind":"matrix","rows":[["2"]]}')));
    expect(JSON.stringify(q)).toBe(
      JSON.stringify(canonicalQuestion(readQuestion(doc('{"kind":"matrix","rows":[[2]]}')))),
    );
  });

  it.each([
    ['fraction', doc('{"kind":"matrix","rows":[[1.5]]}'), 'integer', '/source/rows/0/0'],
    ['decimal zero', doc('{"kind":"matrix","rows":[[2.0]]}'), 'integer', '/source/rows/0/0'],
    ['exponent', doc('{"kind":"matrix","rows":[[1e3]]}'), 'integer', '/source/rows/0/0'],
    ['minus zero', doc('{"kind":"matrix","rows":[[-0]]}'), 'integer', '/source/rows/0/0'],
    ['NaN', doc('{"kind":"matrix","rows":[[NaN]]}'), 'json', '/source/rows/0/0'],
    ['beyond 2^53', doc('{"kind":"matrix","rows":[[9007199254740993]]}'), 'integer', '/source/rows/0/0'],
    ['hexadecimal', doc('{"kind":"matrix","rows":[["0x10"]]}'), 'integer', '/source/rows/0/0'],
    ['padded', doc('{"kind":"matrix","rows":[[" 7"]]}'), 'integer', '/source/rows/0/0'],
    ['leading zero', doc('{"kind":"matrix","rows":[["07"]]}'), 'integer', '/source/rows/0/0'],
    ['doubled key', `{"format":"palmette.question/1","format":"x"}`, 'json', '/format'],
    ['ragged', doc('{"kind":"matrix","rows":[[2,-1],[-1]]}'), 'shape', '/source/rows/1'],
    ['empty', doc('{"kind":"matrix","rows":[]}'), 'shape', '/source/rows'],
    ['unknown key', doc(a2, '{"dimension":3}', ',"extra":1'), 'shape', '/extra'],
    ['unknown kind', doc('{"kind":"cube"}'), 'shape', '/source/kind'],
    ['wrong type', doc('{"kind":"tree","vertices":7,"edges":[]}'), 'shape', '/source/vertices'],
    ['digits', doc(`{"kind":"matrix","rows":[["${'9'.repeat(1001)}"]]}`), 'limit', '/source/rows/0/0'],
    ['target', doc(a2, '{"dimension":-1}'), 'shape', '/target/dimension'],
    ['huge target', doc(a2, '{"dimension":1000001}'), 'limit', '/target/dimension'],
    ['depth', doc('['.repeat(80) + ']'.repeat(80)), 'limit', `/source${'/0'.repeat(64)}`],
    ['byte order mark', `\ufeff${doc(a2)}`, 'json', ''],
    ['lone surrogate', doc(a2, '{"dimension":3}', ',"title":"\\ud800"'), 'json', '/title'],
    ['cut off', doc(a2).slice(0, -1), 'json', ''],
    ['trailing text', `${doc(a2)}x`, 'json', ''],
    ['no text', '', 'json', ''],
  ])('refuses %s and names the place', (_name, text, code, path) => {
    expect(refusal(text)).toMatchObject({ code, path });
  });

  it('says what was expected and what was found', () => {
    expect(refusal(doc('{"kind":"matrix","rows":[[1.5]]}')).message).toContain('found 1.5');
    expect(refusal(doc('{"kind":"matrix","rows":[[9007199254740993]]}')).message).toContain(
      'send it as the string "9007199254740993"',
    );
    expect(refusal(doc(a2, '{"dimension":-1}')).message).toContain('found -1');
  });
});
