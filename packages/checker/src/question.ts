/** The question and the claim, and that they belong together. FORMAT.md, sections 3 and 5. */
import { countOf, listOf, NotChecked, objectOf, oneOf, Rejection, type Json, type JsonObject } from './reading.ts';

export type Target =
  | { readonly kind: 'fixed'; readonly dimension: number }
  | { readonly kind: 'least'; readonly upTo: number | null }
  | { readonly kind: 'any' };

export interface Claim {
  readonly verdict: 'embeds' | 'excluded' | 'open';
  readonly ground: string | null;
  readonly target: Target;
  readonly scope: 'one' | 'all';
  readonly dimension: number | null;
  readonly complete: boolean;
  readonly orbits: Json | undefined;
  readonly total: Json | undefined;
}

const TESTS = [
  'complement',
  'metaboliser',
  'pair',
  'cubiquity',
  'changemaker',
  'halfChangemaker',
  'dInvariants',
  'doubleOrbits',
];
const GROUNDS = ['embedding', 'exhaustion', 'dimension', 'determinant', 'hilbert', 'column'];
const METHODS = ['rows', 'columns', 'frames'];

export function readQuestion(value: Json | undefined): JsonObject {
  const q = objectOf(value, '/question', ['format', 'source', 'target', 'scope', 'tests', 'method?', 'secondOpinion?']);
  if (q['format'] !== 'palmette.question/1')
    throw new NotChecked(`the question format ${JSON.stringify(q['format'])} is not known here`);
  oneOf(q['scope'], '/question/scope', ['one', 'all']);
  if (q['method'] !== undefined) oneOf(q['method'], '/question/method', METHODS);
  if (q['secondOpinion'] !== undefined && q['secondOpinion'] !== true)
    throw new Rejection('/question/secondOpinion', 'expected true, or nothing');
  const places = listOf(q['tests'], '/question/tests').map((t, i) =>
    TESTS.indexOf(oneOf(t, `/question/tests/${i}`, TESTS)),
  );
  if (places.some((p, i) => i > 0 && p <= places[i - 1]!)) throw new Rejection('/question/tests', 'not in order');
  return q;
}

export function readClaim(head: JsonObject, question: JsonObject, rank: number): Claim {
  const c = objectOf(head['claim'], '/claim', [
    'verdict',
    'ground',
    'target',
    'scope',
    'dimension',
    'complete',
    'orbits?',
    'total?',
  ]);
  if (JSON.stringify(c['target']) !== JSON.stringify(question['target']))
    throw new Rejection('/claim/target', 'differs from the question');
  if (c['scope'] !== question['scope']) throw new Rejection('/claim/scope', 'differs from the question');
  const ground = c['ground'] ?? null;
  if (typeof ground === 'string' && !GROUNDS.includes(ground))
    throw new NotChecked(`the ground ${JSON.stringify(ground)} is not known here`);
  if (ground !== null && typeof ground !== 'string') throw new Rejection('/claim/ground', 'expected a ground');
  if (typeof c['complete'] !== 'boolean') throw new Rejection('/claim/complete', 'expected true or false');
  return {
    verdict: oneOf(c['verdict'], '/claim/verdict', ['embeds', 'excluded', 'open']),
    ground,
    target: readTarget(c['target']!, rank),
    scope: c['scope'] as 'one' | 'all',
    dimension: c['dimension'] === null ? null : countOf(c['dimension'], '/claim/dimension'),
    complete: c['complete'],
    orbits: c['orbits'],
    total: c['total'],
  };
}

function readTarget(value: Json, rank: number): Target {
  const place = '/claim/target';
  const key = Object.keys(value as object)[0] ?? '';
  const o = objectOf(value, place, [oneOf(key, place, ['dimension', 'excess', 'least', 'any'])]);
  if ('dimension' in o) return { kind: 'fixed', dimension: countOf(o['dimension'], `${place}/dimension`) };
  if ('excess' in o) return { kind: 'fixed', dimension: rank + countOf(o['excess'], `${place}/excess`) };
  if ('any' in o) {
    if (o['any'] !== true) throw new Rejection(`${place}/any`, 'expected true');
    return { kind: 'any' };
  }
  const least = objectOf(o['least'], `${place}/least`, ['upTo?']);
  return { kind: 'least', upTo: least['upTo'] === undefined ? null : countOf(least['upTo'], `${place}/least/upTo`) };
}
