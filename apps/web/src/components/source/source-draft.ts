/**
 * What stands in the forms of a source, as typed, and how it becomes a source. Every kind keeps its own text while one
 * looks at another.
 */
import { LIMITS, type Source, type WireInteger } from '@palmette/contracts';
import { readPasted, SourceFault } from '@palmette/lattice';
import { canonicalInteger, integersIn, pairsIn, readInteger } from './read-integers.ts';
import { readSummands } from './read-summands.ts';

export type SourceKind = Source['kind'];
export type StarOrientation = 'entered' | 'reversed' | 'definite';

export interface TreeVertex {
  readonly name: string;
  /** As typed; may be no integer yet. */
  readonly weight: string;
}
export type TreeEdge = readonly [string, string, 1 | -1];
export interface TreeDraft {
  readonly vertices: readonly TreeVertex[];
  readonly edges: readonly TreeEdge[];
}

export interface SourceDraft {
  kind: SourceKind;
  matrix: { text: string };
  tree: TreeDraft;
  fraction: { text: string; orientation: 'chain' | 'dual' };
  seifert: { centre: string; slopes: string; orientation: StarOrientation };
  montesinos: { text: string; orientation: StarOrientation };
  diagram: { text: string; colouring: '0' | '1' };
  graph: { text: string; lattice: 'cuts' | 'flows' };
  sum: { text: string };
}

export function emptyDraft(): SourceDraft {
  return {
    kind: 'fraction',
    matrix: { text: '' },
    tree: { vertices: [], edges: [] },
    fraction: { text: '', orientation: 'chain' },
    seifert: { centre: '', slopes: '', orientation: 'definite' },
    montesinos: { text: '', orientation: 'definite' },
    diagram: { text: '', colouring: '0' },
    graph: { text: '', lattice: 'cuts' },
    sum: { text: '' },
  };
}

/** True if nothing has been typed into the form of the kind that is chosen. */
export function isEmpty(draft: SourceDraft): boolean {
  switch (draft.kind) {
    case 'tree':
      return draft.tree.vertices.length === 0;
    case 'seifert':
      return draft.seifert.centre.trim() === '' && draft.seifert.slopes.trim() === '';
    default:
      return draft[draft.kind].text.trim() === '';
  }
}

/**
 * @throws SourceFault with a place inside the source, what was expected and what was found
 */
export function readDraft(draft: SourceDraft): Source {
  switch (draft.kind) {
    case 'matrix':
      return { kind: 'matrix', rows: readPasted(draft.matrix.text).rows };
    case 'tree':
      return readTree(draft.tree);
    case 'fraction': {
      const [pair, more] = pairsIn(draft.fraction.text, '');
      if (pair === undefined || more !== undefined)
        throw new SourceFault('', `expected one fraction p/q such as 17/5, found ${quoted(draft.fraction.text)}`);
      return { kind: 'fraction', p: pair[0], q: pair[1], orientation: draft.fraction.orientation };
    }
    case 'seifert':
      return {
        kind: 'seifert',
        centre: readInteger(draft.seifert.centre, '/centre', 'the central weight, an integer'),
        fibres: pairsIn(draft.seifert.slopes, '/fibres'),
        orientation: draft.seifert.orientation,
      };
    case 'montesinos':
      return readStrands(draft.montesinos.text, draft.montesinos.orientation);
    case 'diagram':
      return {
        kind: 'diagram',
        pd: inGroups(integersIn(draft.diagram.text, '/pd'), 4, 'crossings of four labels each') as never,
        colouring: draft.diagram.colouring === '1' ? 1 : 0,
      };
    case 'graph':
      return {
        kind: 'graph',
        edges: inGroups(integersIn(draft.graph.text, '/edges', true), 2, 'edges of two ends each') as never,
        lattice: draft.graph.lattice,
      };
    case 'sum':
      return { kind: 'sum', of: readSummands(draft.sum.text) };
  }
}

function quoted(text: string): string {
  const short = text.trim().slice(0, 40);
  return short === '' ? 'nothing' : JSON.stringify(short);
}

function readTree(tree: TreeDraft): Source {
  return {
    kind: 'tree',
    vertices: tree.vertices.map(({ name, weight }, i) => {
      if (name.trim() === '' || name.length > LIMITS.nameCharacters)
        throw new SourceFault(
          `/vertices/${i}/name`,
          `expected a name of 1 to ${LIMITS.nameCharacters} characters, found ${quoted(name)}`,
        );
      return { name, weight: readInteger(weight, `/vertices/${i}/weight`, 'an integer') };
    }),
    edges: tree.edges.map(([a, b, sign]) => (sign === -1 ? [a, b, -1] : [a, b])),
  };
}

/** P(3, 5, −7), a list of integers (a pretzel too), M(2/5, …) or a list of slopes. */
function readStrands(text: string, orientation: StarOrientation): Source {
  const inner = /^\s*[PM]?\s*\(([\s\S]*)\)\s*$/i.exec(text)?.[1] ?? text;
  if (inner.includes('/')) {
    const slopes = pairsIn(inner, '/slopes');
    return { kind: 'montesinos', slopes, orientation };
  }
  return { kind: 'montesinos', pretzel: integersIn(inner, '/pretzel'), orientation };
}

function inGroups(list: readonly WireInteger[], size: number, what: string): WireInteger[][] {
  if (list.length === 0 || list.length % size !== 0)
    throw new SourceFault('', `expected ${what}, found ${list.length} ${list.length === 1 ? 'integer' : 'integers'}`);
  return Array.from({ length: list.length / size }, (_, k) => list.slice(k * size, (k + 1) * size));
}

/** Puts a source into the form of its kind and turns to it. */
export function fillDraft(draft: SourceDraft, source: Source): void {
  draft.kind = source.kind;
  const pairs = (list: readonly (readonly WireInteger[])[]) => list.map(([a, b]) => `${a}/${b}`).join(', ');
  switch (source.kind) {
    case 'matrix':
      draft.matrix = { text: source.rows.map((row) => row.join(' ')).join('\n') };
      break;
    case 'tree':
      draft.tree = {
        vertices: source.vertices.map(({ name, weight }) => ({ name, weight: String(weight) })),
        edges: source.edges.map(([a, b, sign]) => [a, b, sign === -1 ? -1 : 1]),
      };
      break;
    case 'fraction':
      draft.fraction = { text: `${source.p}/${source.q}`, orientation: source.orientation };
      break;
    case 'seifert':
      draft.seifert = {
        centre: String(source.centre),
        slopes: pairs(source.fibres),
        orientation: source.orientation,
      };
      break;
    case 'montesinos':
      draft.montesinos = {
        text: source.pretzel === undefined ? pairs(source.slopes ?? []) : `P(${source.pretzel.join(', ')})`,
        orientation: source.orientation,
      };
      break;
    case 'diagram':
      draft.diagram = {
        text: source.pd.map((crossing) => `[${crossing.join(', ')}]`).join('\n'),
        colouring: source.colouring === 1 ? '1' : '0',
      };
      break;
    case 'graph':
      draft.graph = { text: source.edges.map(([a, b]) => `${a}–${b}`).join('\n'), lattice: source.lattice };
      break;
    case 'sum':
      draft.sum = { text: source.of.map(summandText).join('\n') };
      break;
  }
}

/** A summand on a line of its own: short where there is a short way, else as JSON. */
function summandText(source: Source): string {
  if (source.kind === 'fraction' && source.orientation === 'chain') return `${source.p}/${source.q}`;
  if (source.kind === 'montesinos' && source.pretzel !== undefined && source.orientation === 'definite')
    return `P(${source.pretzel.join(', ')})`;
  if (source.kind === 'matrix' && source.rows.length > 1)
    return JSON.stringify(source.rows.map((row) => row.map(canonicalInteger))).replaceAll('"', '');
  return JSON.stringify(source);
}
