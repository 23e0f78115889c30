/** The picture of a plumbing, or of any matrix as a graph: vertices with their weights, edges, folded runs. */
import type { GraphEdge } from './graph.ts';
import type { Drawing, Mark, TextMark } from './marks.ts';
import { numeral, textWidth, type DrawnInteger } from './numerals.ts';
import { placeGraph, type Places } from './tree-places.ts';

export interface TreeInput {
  readonly weights: readonly DrawnInteger[];
  readonly edges: readonly GraphEdge[];
}

export type TreeSizeName = 'wide' | 'narrow' | 'small';

export interface TreeOptions {
  /** `small` is for tables: no weights. */
  readonly size?: TreeSizeName;
}

export interface TreePicture extends Drawing {
  readonly vertices: readonly { readonly vertex: number; readonly x: number; readonly y: number }[];
}

interface TreeSize {
  readonly pitch: number;
  readonly row: number;
  readonly dot: number;
  readonly line: number;
  /** 0: no weights. */
  readonly font: number;
  /** Runs of so many equal vertices are folded, in pictures of more than `foldAbove` vertices. */
  readonly foldFrom: number;
  readonly foldAbove: number;
  /** Most vertices that still make a picture. */
  readonly most: number;
}

const SIZES: Readonly<Record<TreeSizeName, TreeSize>> = {
  wide: { pitch: 54, row: 50, dot: 5, line: 1.6, font: 15, foldFrom: 5, foldAbove: 16, most: 400 },
  narrow: { pitch: 37, row: 50, dot: 5, line: 1.6, font: 15, foldFrom: 4, foldAbove: 8, most: 400 },
  small: { pitch: 13, row: 10, dot: 2.2, line: 1.1, font: 0, foldFrom: 5, foldAbove: 8, most: 60 },
};
const PAD = 4;

/** @returns null where a picture would say nothing: too many vertices, or a big graph with cycles */
export function layTree(input: TreeInput, options: TreeOptions = {}): TreePicture | null {
  const size = SIZES[options.size ?? 'wide'];
  const count = input.weights.length;
  const edges = input.edges.filter(([a, b]) => a !== b);
  const alike = (a: number, b: number) => String(input.weights[a]) === String(input.weights[b]);
  const places = placeGraph({ size: count, edges }, count > size.foldAbove ? { foldFrom: size.foldFrom, alike } : {});
  if (places === null || places.vertices.length > size.most) return null;
  return size.font === 0 ? drawSmall(places, edges, size) : drawFull(places, input, edges, size);
}

type At = (vertex: number) => { readonly x: number; readonly y: number };

function drawSmall(places: Places, edges: readonly GraphEdge[], size: TreeSize): TreePicture {
  const points = places.vertices.map((v) => ({
    vertex: v.vertex,
    x: PAD + size.dot + v.column * size.pitch,
    y: PAD + size.dot + v.row * size.row,
  }));
  return {
    width: 2 * (PAD + size.dot) + Math.max(0, places.columns - 1) * size.pitch,
    height: 2 * (PAD + size.dot) + Math.max(0, places.rows - 1) * size.row,
    vertices: points,
    marks: [...edgeMarks(places, edges, pointAt(points), size), ...dotMarks(points, size)],
  };
}

function drawFull(places: Places, input: TreeInput, edges: readonly GraphEdge[], size: TreeSize): TreePicture {
  const shown = input.weights.map(numeral);
  const widest = Math.max(
    0,
    ...places.vertices.map(({ vertex }) => textWidth([{ text: shown[vertex]!.text }], size.font)),
  );
  const pitch = Math.max(size.pitch, widest + 8);
  const side = PAD + Math.max(size.dot, widest / 2);
  const above = PAD + 1.7 * size.font;
  const points = places.vertices.map((v) => ({
    vertex: v.vertex,
    x: side + v.column * pitch,
    y: above + v.row * size.row,
  }));
  const weights = places.vertices.map((v, i): TextMark => {
    const { x, y } = points[i]!;
    const { text, tip } = shown[v.vertex]!;
    // beside a branch that leaves downwards the weight stands to the left of it
    const aside = !v.top && v.branches;
    return {
      kind: 'text',
      x: aside ? x + 2 : x,
      y: v.top ? y - size.dot - 0.6 * size.font : y + size.dot + 1.2 * size.font,
      size: size.font,
      weight: 500,
      anchor: aside ? 'end' : 'middle',
      fill: 'ink',
      runs: [{ text }],
      ...(tip === undefined ? {} : { tip }),
      part: { role: 'weight', vertex: v.vertex },
    };
  });
  return {
    width: Math.ceil(2 * side + Math.max(0, places.columns - 1) * pitch),
    height: Math.ceil(above + Math.max(0, places.rows - 1) * size.row + size.dot + 1.6 * size.font + PAD),
    vertices: points,
    marks: [...edgeMarks(places, edges, pointAt(points), size), ...dotMarks(points, size), ...weights],
  };
}

function pointAt(points: TreePicture['vertices']): At {
  const byVertex = new Map(points.map((p) => [p.vertex, p]));
  return (vertex) => byVertex.get(vertex)!;
}

function dotMarks(points: TreePicture['vertices'], size: TreeSize): Mark[] {
  return points.map(({ vertex, x, y }) => ({
    kind: 'round',
    x,
    y,
    radius: size.dot,
    halfWidth: size.dot,
    fill: 'ink',
    stroke: null,
    width: 0,
    part: { role: 'dot', vertex },
  }));
}

function edgeMarks(places: Places, edges: readonly GraphEdge[], at: At, size: TreeSize): Mark[] {
  const standing = new Set(places.vertices.map(({ vertex }) => vertex));
  const folded = new Set(places.folds.map(({ from, to }) => `${from} ${to}`));
  const marks: Mark[] = [];
  edges.forEach(([a, b, value], edge) => {
    if (!standing.has(a) || !standing.has(b) || folded.has(`${a} ${b}`) || folded.has(`${b} ${a}`)) return;
    const [p, q] = [at(a), at(b)];
    marks.push({
      kind: 'line',
      x1: p.x,
      y1: p.y,
      x2: q.x,
      y2: q.y,
      stroke: 'ink',
      width: size.line,
      ...(value < 0 ? { dash: [5, 4] as const } : {}),
      part: { role: 'edge', edge },
    });
    if (Math.abs(value) !== 1 && size.font > 0)
      marks.push(between(p, q, numeral(value).text, size, { role: 'edge', edge }));
  });
  for (const { from, to, count } of places.folds) {
    const [p, q] = [at(from), at(to)];
    const part = { role: 'edge' } as const;
    marks.push({
      kind: 'line',
      x1: p.x,
      y1: p.y,
      x2: q.x,
      y2: q.y,
      stroke: 'ink',
      width: size.line,
      dash: size.font > 0 ? [1.5, 6] : [1, 3],
      part,
    });
    if (size.font > 0) marks.push(between(p, q, `${count} ×`, size, part));
  }
  return marks;
}

function between(
  p: { readonly x: number; readonly y: number },
  q: { readonly x: number; readonly y: number },
  text: string,
  size: TreeSize,
  part: Mark['part'],
): TextMark {
  return {
    kind: 'text',
    x: (p.x + q.x) / 2,
    y: (p.y + q.y) / 2 - 0.45 * size.font,
    size: 0.87 * size.font,
    weight: 400,
    anchor: 'middle',
    fill: 'soft',
    runs: [{ text }],
    part,
  };
}
