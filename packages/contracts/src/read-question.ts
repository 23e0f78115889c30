/** From text to a question, and from a question to its one canonical spelling. DECISIONS.md, sections 2 and 7. */
import type { z } from 'zod';
import { canonicalInteger, describeValue } from './integer.ts';
import { ERROR_CODES, Refusal, type ErrorCode } from './errors.ts';
import { LIMITS } from './limits.ts';
import { question as questionSchema, TEST_NAMES, type Question, type Source, type Target } from './question.ts';
import { pointerStep, readStrictJson } from './strict-json.ts';

/** The value at a path of a document, for messages. */
function valueAt(document: unknown, path: readonly PropertyKey[]): unknown {
  return path.reduce<unknown>((at, step) => (at as Record<PropertyKey, unknown> | null | undefined)?.[step], document);
}

/** The first fault that a schema found, as a refusal that names place, expectation and finding. */
export function refusalFromSchema(error: z.ZodError, document: unknown): Refusal {
  let issue = error.issues[0]!;
  let prefix: PropertyKey[] = [];
  while (issue.code === 'invalid_union' && issue.errors.some((branch) => branch.length > 0)) {
    // the branch that got furthest into the document says most
    const deepest = issue.errors.filter((b) => b.length > 0).sort((a, b) => b[0]!.path.length - a[0]!.path.length)[0]!;
    if (deepest[0]!.path.length === 0 && issue.errors.length > 1) break;
    prefix = [...prefix, ...issue.path];
    issue = deepest[0]!;
  }
  const path = [...prefix, ...issue.path];
  const pointer = path.map((step) => pointerStep(String(step))).join('');
  const found = describeValue(valueAt(document, path));
  const params = (issue as { params?: { refusal?: string } }).params;
  const code = (ERROR_CODES as readonly string[]).includes(params?.refusal ?? '')
    ? (params!.refusal as ErrorCode)
    : 'shape';
  switch (issue.code) {
    case 'custom':
      return new Refusal(code, issue.message, pointer);
    case 'unrecognized_keys':
      return new Refusal(
        'shape',
        `unknown key ${JSON.stringify(issue.keys[0])}`,
        pointer + pointerStep(issue.keys[0]!),
      );
    case 'invalid_type':
      return new Refusal('shape', `expected ${withArticle(issue.expected)}, found ${found}`, pointer);
    case 'invalid_value':
      return new Refusal(
        'shape',
        `expected ${issue.values.map((v) => JSON.stringify(v)).join(' or ')}, found ${found}`,
        pointer,
      );
    case 'too_big':
      return new Refusal(
        'limit',
        `expected at most ${issue.maximum}${ofWhat(issue.origin)}, found ${sizeOf(document, path, issue.origin)}`,
        pointer,
      );
    case 'too_small':
      return new Refusal(
        'shape',
        `expected at least ${issue.minimum}${ofWhat(issue.origin)}, found ${sizeOf(document, path, issue.origin)}`,
        pointer,
      );
    case 'invalid_union': {
      const kind = (issue as { discriminator?: string }).discriminator;
      return kind === 'kind'
        ? new Refusal(
            'shape',
            `expected a kind of source (matrix, tree, fraction, seifert, montesinos, diagram, graph, sum), found ${found}`,
            pointer,
          )
        : new Refusal('shape', `expected one of the forms that INTERFACES allows here, found ${found}`, pointer);
    }
    default:
      return new Refusal('shape', `${issue.message}, found ${found}`, pointer);
  }
}

function withArticle(type: string): string {
  if (type === 'array') return 'a list';
  if (type === 'tuple') return 'a list of fixed length';
  if (type === 'int') return 'an integer';
  return /^[aeiou]/.test(type) ? `an ${type}` : `a ${type}`;
}

function ofWhat(origin: string): string {
  if (origin === 'array') return ' entries';
  if (origin === 'string') return ' characters';
  return '';
}

function sizeOf(document: unknown, path: readonly PropertyKey[], origin: string): string {
  const value = valueAt(document, path);
  return (origin === 'array' || origin === 'string') && value !== null && value !== undefined
    ? String((value as { length: number }).length)
    : describeValue(value);
}

/** Checks a value against a schema; the first fault is thrown as a refusal. */
export function validate<T>(schema: z.ZodType<T>, document: unknown): T {
  const result = schema.safeParse(document);
  if (result.success) return result.data;
  throw refusalFromSchema(result.error, document);
}

function countSummands(source: Source): number {
  return source.kind === 'sum' ? source.of.reduce((count, part) => count + countSummands(part), 0) : 1;
}

/**
 * Reads a question document.
 * @throws Refusal with the path of the field, what was expected and what was found.
 */
export function readQuestion(text: string): Question {
  if (text.length > LIMITS.questionCharacters) {
    throw new Refusal('limit', `expected at most ${LIMITS.questionCharacters} characters, found ${text.length}`, '');
  }
  return validateQuestion(readStrictJson(text));
}

/** The same for a document that is already a value (strictly read, or built by a program). */
export function validateQuestion(document: unknown): Question {
  const question = validate(questionSchema, document) as Question;
  const summands = countSummands(question.source);
  if (summands > LIMITS.summands)
    throw new Refusal('limit', `expected at most ${LIMITS.summands} summands, found ${summands}`, '/source/of');
  return question;
}

function canonicalSource(source: Source): Source {
  const int = canonicalInteger;
  const pairs = <T extends readonly (number | string)[]>(list: readonly T[]): T[] =>
    list.map((p) => p.map(int) as unknown as T);
  switch (source.kind) {
    case 'matrix':
      return { kind: 'matrix', rows: source.rows.map((row) => row.map(int)) };
    case 'tree':
      return {
        kind: 'tree',
        vertices: source.vertices.map((v) => ({ name: v.name, weight: int(v.weight) })),
        edges: source.edges.map((e) => (e[2] === -1 ? [e[0], e[1], -1] : [e[0], e[1]])),
      };
    case 'fraction':
      return { kind: 'fraction', p: int(source.p), q: int(source.q), orientation: source.orientation };
    case 'seifert':
      return {
        kind: 'seifert',
        centre: int(source.centre),
        fibres: pairs(source.fibres),
        orientation: source.orientation,
      };
    case 'montesinos':
      return {
        kind: 'montesinos',
        ...(source.slopes === undefined ? {} : { slopes: pairs(source.slopes) }),
        ...(source.pretzel === undefined ? {} : { pretzel: source.pretzel.map(int) }),
        orientation: source.orientation,
      };
    case 'diagram':
      return { kind: 'diagram', pd: pairs(source.pd), colouring: source.colouring };
    case 'graph':
      return { kind: 'graph', edges: pairs(source.edges), lattice: source.lattice };
    case 'sum':
      return { kind: 'sum', of: source.of.map(canonicalSource) };
  }
}

function canonicalTarget(target: Target): Target {
  if ('dimension' in target) return { dimension: target.dimension };
  if ('excess' in target) return { excess: target.excess };
  if ('least' in target) return { least: target.least.upTo === undefined ? {} : { upTo: target.least.upTo } };
  return { any: true };
}

/** The question as a certificate carries it: fixed key order, no title, no budget. */
export type CanonicalQuestion = Pick<Question, 'format' | 'source' | 'target' | 'scope' | 'tests' | 'method'> & {
  readonly secondOpinion?: true;
};

export function canonicalQuestion(question: Question): CanonicalQuestion {
  const tests = new Set(question.tests);
  return {
    format: question.format,
    source: canonicalSource(question.source),
    target: canonicalTarget(question.target),
    scope: question.scope,
    tests: TEST_NAMES.filter((name) => tests.has(name)),
    ...(question.method === undefined ? {} : { method: question.method }),
    ...(question.secondOpinion === true ? { secondOpinion: true } : {}),
  };
}
