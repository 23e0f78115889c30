/** The question document `palmette.question/1`: shape and limits. What a source means is said in packages/lattice. */
import { z } from 'zod';
import { describeValue, integerFault, wireInteger, type WireInteger } from './integer.ts';
import { LIMITS } from './limits.ts';

const pair = z.tuple([wireInteger, wireInteger]);
const orientation = z.enum(['entered', 'reversed', 'definite']);
const vertexName = z.string().min(1).max(LIMITS.nameCharacters);

/** Rows are read by a loop: a schema for each entry of a big matrix is 20 times slower. */
const matrixRows = z
  .any()
  .superRefine((rows: unknown, context) => {
    const refuse = (path: (string | number)[], message: string, refusal = 'shape') =>
      context.addIssue({ code: 'custom', path, message, params: { refusal } });
    if (!Array.isArray(rows)) return refuse([], `expected a list of rows, found ${describeValue(rows)}`);
    if (rows.length === 0) return refuse([], 'expected at least one row, found none');
    if (rows.length > LIMITS.rank)
      return refuse([], `expected at most ${LIMITS.rank} rows, found ${rows.length}`, 'limit');
    for (let i = 0; i < rows.length; i += 1) {
      const row: unknown = rows[i];
      if (!Array.isArray(row)) return refuse([i], `expected a list of integers, found ${describeValue(row)}`);
      if (row.length !== rows.length) {
        return refuse(
          [i],
          `row ${i + 1} has ${row.length} entries, expected ${rows.length}: the matrix has ${rows.length} rows`,
        );
      }
      for (let j = 0; j < row.length; j += 1) {
        const fault = integerFault(row[j]);
        if (fault !== undefined) return refuse([i, j], fault, fault.includes('digits,') ? 'limit' : 'integer');
      }
    }
  })
  .transform((rows) => rows as WireInteger[][])
  .openapi({ type: 'array', items: { type: 'array', items: { type: ['integer', 'string'] } } } as never);

export const matrixSource = z.strictObject({ kind: z.literal('matrix'), rows: matrixRows });
export const treeSource = z.strictObject({
  kind: z.literal('tree'),
  vertices: z
    .array(z.strictObject({ name: vertexName, weight: wireInteger }))
    .min(1)
    .max(LIMITS.rank),
  edges: z
    .array(
      z.union([
        z.tuple([vertexName, vertexName]),
        z.tuple([vertexName, vertexName, z.union([z.literal(1), z.literal(-1)])]),
      ]),
    )
    .max(4 * LIMITS.rank),
});
export const fractionSource = z.strictObject({
  kind: z.literal('fraction'),
  p: wireInteger,
  q: wireInteger,
  orientation: z.enum(['chain', 'dual']).default('chain'),
});
export const seifertSource = z.strictObject({
  kind: z.literal('seifert'),
  centre: wireInteger,
  fibres: z.array(pair).max(LIMITS.rank),
  orientation: orientation.default('definite'),
});
export const montesinosSource = z.strictObject({
  kind: z.literal('montesinos'),
  slopes: z.array(pair).min(1).max(LIMITS.rank).optional(),
  pretzel: z.array(wireInteger).min(1).max(LIMITS.rank).optional(),
  orientation: orientation.default('definite'),
});
export const diagramSource = z.strictObject({
  kind: z.literal('diagram'),
  pd: z
    .array(z.tuple([wireInteger, wireInteger, wireInteger, wireInteger]))
    .min(1)
    .max(LIMITS.rank),
  colouring: z.union([z.literal(0), z.literal(1)]),
});
export const graphSource = z.strictObject({
  kind: z.literal('graph'),
  edges: z
    .array(pair)
    .min(1)
    .max(4 * LIMITS.rank),
  lattice: z.enum(['cuts', 'flows']),
});

export type PlainSource =
  | z.output<typeof matrixSource>
  | z.output<typeof treeSource>
  | z.output<typeof fractionSource>
  | z.output<typeof seifertSource>
  | z.output<typeof montesinosSource>
  | z.output<typeof diagramSource>
  | z.output<typeof graphSource>;
export interface SumSource {
  kind: 'sum';
  of: Source[];
}
export type Source = PlainSource | SumSource;

const sourceParts = [
  matrixSource,
  treeSource,
  fractionSource,
  seifertSource,
  montesinosSource,
  diagramSource,
  graphSource,
] as const;

export const source: z.ZodType<Source> = z
  .lazy(() =>
    z.discriminatedUnion('kind', [
      ...sourceParts,
      z.strictObject({ kind: z.literal('sum'), of: z.array(source).min(1).max(LIMITS.summands) }),
    ]),
  )
  .openapi('Source') as z.ZodType<Source>;

const dimension = z.number().int().min(0).max(LIMITS.dimension);
export const target = z.union([
  z.strictObject({ dimension }),
  z.strictObject({ excess: z.number().int().min(0).max(LIMITS.dimension) }),
  z.strictObject({ least: z.strictObject({ upTo: dimension.optional() }) }),
  z.strictObject({ any: z.literal(true) }),
]);
export type Target = z.output<typeof target>;

export const SCOPES = ['one', 'all'] as const;
export type Scope = (typeof SCOPES)[number];

export const TEST_NAMES = [
  'complement',
  'metaboliser',
  'pair',
  'cubiquity',
  'changemaker',
  'halfChangemaker',
  'dInvariants',
  'doubleOrbits',
] as const;
export type TestName = (typeof TEST_NAMES)[number];

/** How embeddings are listed; FORMAT.md of packages/certificate says what each method does. */
export const METHOD_NAMES = ['rows', 'columns', 'frames'] as const;
export type MethodName = (typeof METHOD_NAMES)[number];

export const QUESTION_FORMAT = 'palmette.question/1';

export const question = z.strictObject({
  format: z.literal(QUESTION_FORMAT),
  title: z.string().max(LIMITS.titleCharacters).optional(),
  source,
  target,
  scope: z.enum(SCOPES).default('all'),
  tests: z.array(z.enum(TEST_NAMES)).max(TEST_NAMES.length).default([]),
  /** Forces a method; left out, the engine chooses. */
  method: z.enum(METHOD_NAMES).optional(),
  /** Answers by two methods and says whether they agree. */
  secondOpinion: z.boolean().optional(),
  budget: z.strictObject({ cpuSeconds: z.number().int().min(1).max(LIMITS.budgetCpuSeconds) }).optional(),
});
export type Question = z.output<typeof question>;
