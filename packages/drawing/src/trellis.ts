/**
 * The trellis: an embedding as a tree trained flat against n wires. This file places everything; trellis-marks.ts draws
 * it. Measures are those of LOOK-DETAIL, section 3, and the sheet beside it.
 */
import type { GraphEdge } from './graph.ts';
import type { Drawing, PathStep, TextRun } from './marks.ts';
import { grouped, numeral, textWidth, type DrawnInteger, type Numeral } from './numerals.ts';
import { vertexOrder } from './order-vertices.ts';
import { hangWires, type Wire, type WireOptions } from './order-wires.ts';
import { SIZES, type Size, type SizeName } from './sizes.ts';
import { fruitSize } from './fruit.ts';
import { radicalLabel, wireLabel } from './trellis-labels.ts';
import { trellisMarks } from './trellis-marks.ts';

export interface TrellisInput {
  /** One row for each vertex: its image. Zero columns may be left out and counted. */
  readonly matrix: readonly (readonly DrawnInteger[])[];
  readonly zeroColumns?: number;
  readonly names: readonly string[];
  /** As typed. */
  readonly weights: readonly DrawnInteger[];
  readonly edges: readonly GraphEdge[];
  /** Numbers that the columns have elsewhere; left out, the wires are counted as they hang. */
  readonly columnNumbers?: readonly number[];
  /** A basis of the radical: coefficients in the order of the rows. */
  readonly radical?: readonly (readonly DrawnInteger[])[];
}

export interface TrellisOptions extends Pick<WireOptions, 'arrange' | 'bundleFrom'> {
  readonly size?: SizeName;
  /** Room at the right for the terms of an inner product. */
  readonly products?: boolean;
  /** Left out in small pictures. */
  readonly labels?: boolean;
  /** All radical vectors instead of one line for more than three. */
  readonly unfoldRadical?: boolean;
  /** The vertices stand as typed. */
  readonly asTyped?: boolean;
}

export interface TrellisVertex {
  /** Row of the matrix. */
  readonly row: number;
  readonly name: string;
  readonly weight: Numeral;
  readonly x: number;
  /** Number of the last wire that it uses; −1 if it goes to 0. */
  readonly lowest: number;
}

export interface TrellisWire extends Wire {
  readonly y: number;
  readonly label: readonly TextRun[];
}

export interface TrellisEdge {
  /** Places on the bar, left to right. */
  readonly from: number;
  readonly to: number;
  readonly value: number;
  readonly steps: readonly PathStep[];
  /** Top of its arch; the bar's own height for a straight one. */
  readonly top: number;
}

export interface Trellis extends Drawing {
  readonly size: Size;
  /** By place on the bar. */
  readonly vertices: readonly TrellisVertex[];
  readonly wires: readonly TrellisWire[];
  readonly edges: readonly TrellisEdge[];
  readonly bare: number;
  readonly radical: readonly (readonly Numeral[])[];
  readonly radicalCount: number;
  /** Pitch of the vertices: wider than the size's own where numbers need it. */
  readonly px: number;
  readonly barY: number;
  /** The wires run from here to there; what is left of the start are the labels. */
  readonly wireStart: number;
  readonly wireEnd: number;
  readonly bareY: number;
  readonly radicalY: number;
  readonly productX: number;
  readonly sumY: number;
  readonly minusAtLeft: boolean;
  readonly labelled: boolean;
}

/** Radical vectors that are shown without being asked for. */
export const SHOWN_RADICAL = 3;
/** A form with more edges than this many times its vertices is shown without them: its arches would hide everything. */
const EDGES_DRAWN = 2;
const PAD = 4;

/** Which lines a trellis of this input has: what its size is chosen by. */
export function linesOf(input: TrellisInput, bundleFrom?: number): number {
  const order = input.matrix.map((_, row) => row);
  const { wires, bare } = hangWires(input.matrix, order, {
    ...(bundleFrom === undefined ? {} : { bundleFrom }),
    zeroColumns: input.zeroColumns ?? 0,
  });
  return wires.length + (bare > 0 ? 1 : 0);
}

export function layTrellis(input: TrellisInput, options: TrellisOptions = {}): Trellis {
  const { matrix, names, weights } = input;
  const size = SIZES[options.size ?? 'roomy'];
  const labelled = options.labels ?? true;
  const order =
    options.asTyped === true ? matrix.map((_, row) => row) : vertexOrder({ size: matrix.length, edges: input.edges });
  const { wires, bare } = hangWires(matrix, order, {
    arrange: options.arrange ?? 'staircase',
    ...(options.bundleFrom === undefined ? {} : { bundleFrom: options.bundleFrom }),
    zeroColumns: input.zeroColumns ?? 0,
  });
  const minusAtLeft =
    labelled && size.name === 'fine' && order.length > 0 && weights.every((w) => String(w).startsWith('-'));
  const shown = order.map((row) => numeral(minusAtLeft ? String(weights[row]).slice(1) : weights[row]!));
  const radicalCount = input.radical?.length ?? 0;
  const folded = radicalCount > SHOWN_RADICAL && options.unfoldRadical !== true;
  const radical = folded ? [] : (input.radical ?? []).map((vector) => order.map((row) => numeral(vector[row]!)));
  const px = pitch(size, shown, wires, radical, labelled);

  const labels = wires.map((wire) => wireLabel(wire, input.columnNumbers));
  const labelWidth = labelled
    ? Math.max(
        0,
        ...labels.map((runs) => textWidth(runs, size.font)),
        radicalCount > 0 ? textWidth(radicalLabel(radicalCount, folded), size.font * 0.87) : 0,
      )
    : 0;
  const wireStart = PAD + labelWidth + (labelled ? 0.5 * size.font : 0);
  const xOf = (place: number) => wireStart + (place + 0.5) * px;
  const wireEnd = xOf(Math.max(order.length, 1) - 1) + 0.5 * px;

  const placeOf = new Array<number>(order.length);
  order.forEach((row, place) => (placeOf[row] = place));
  const drawn = input.edges.length <= EDGES_DRAWN * matrix.length ? input.edges.filter(([a, b]) => a !== b) : [];
  const spans = drawn.map(([a, b, value]) => {
    const [from, to] = [placeOf[a]!, placeOf[b]!].sort((m, n) => m - n) as [number, number];
    return { from, to, value, rise: to - from === 1 ? 0 : archHeight(size, to - from) };
  });
  const valued = spans.some(({ value }) => Math.abs(value) > 1) ? size.font : 0;
  const barY = PAD + valued + Math.max(size.dot, ...spans.map(({ rise }) => rise));
  const lineY = (line: number) =>
    barY + 1.75 * size.font + Math.max(0.62 * size.py, 0.75 * size.leafLength) + line * size.py;
  const edges = spans.map(({ from, to, value, rise }) => ({
    from,
    to,
    value,
    steps: edgePath(xOf(from), xOf(to), barY, rise, px),
    top: barY - rise,
  }));

  const lowest = new Array<number>(order.length).fill(-1);
  wires.forEach(({ entries }, line) => entries.forEach(({ place }) => (lowest[place] = line)));
  const lines = wires.length + (bare > 0 ? 1 : 0);
  const lastY = lines > 0 ? lineY(lines - 1) : barY + 1.75 * size.font;
  const radicalY = lastY + 0.66 * size.py;
  const sumY = lineY(Math.max(wires.length, 1) - 1) + 0.5 * size.py;
  const bottoms = [lastY + Math.max(0.62 * size.leafLength, 0.34 * size.font) + PAD];
  if (radicalCount > 0) bottoms.push(radicalY + (1.25 + 1.6 * (Math.max(radical.length, 1) - 1) + 0.4) * size.font);
  if (options.products === true) bottoms.push(sumY + 1.6 * size.font);

  const counts = rightCounts(wires, bare, radicalCount);
  const countWidth = labelled ? Math.max(0, ...counts.map((text) => textWidth([{ text }], size.font))) : 0;
  const rightX = wireEnd + 0.5 * size.font;
  const productX = rightX + (countWidth > 0 ? countWidth + 0.8 * size.font : 0);
  const right =
    options.products === true ? productX + productWidth(wires, size) : countWidth > 0 ? rightX + countWidth : wireEnd;

  const trellis: Omit<Trellis, 'marks'> = {
    width: Math.ceil(right + PAD),
    height: Math.ceil(Math.max(...bottoms)),
    size,
    vertices: order.map((row, place) => ({
      row,
      name: names[row] ?? `v${row + 1}`,
      weight: shown[place]!,
      x: xOf(place),
      lowest: lowest[place]!,
    })),
    wires: wires.map((wire, line) => ({ ...wire, y: lineY(line), label: labels[line]! })),
    edges,
    bare,
    radical,
    radicalCount,
    px,
    barY,
    wireStart,
    wireEnd,
    bareY: lineY(wires.length),
    radicalY,
    productX,
    sumY,
    minusAtLeft,
    labelled,
  };
  return { ...trellis, marks: trellisMarks(trellis) };
}

function rightCounts(wires: readonly Wire[], bare: number, radicalCount: number): string[] {
  return [
    ...wires.filter(({ columns }) => columns.length > 1).map(({ columns }) => `×${columns.length}`),
    ...(bare > 0 ? [`${grouped(bare)} bare`] : []),
    ...(radicalCount > 0 ? ['→ 0'] : []),
  ];
}

/** Pitch of the vertices: that of the size, wider where a weight, a fruit or a coefficient would touch its neighbour. */
function pitch(
  size: Size,
  weights: readonly Numeral[],
  wires: readonly Wire[],
  radical: readonly (readonly Numeral[])[],
  labelled: boolean,
): number {
  const gap = size.name === 'fine' ? 2 : 0.4 * size.font;
  const widest = (list: readonly Numeral[], font: number) =>
    list.reduce((most, { text }) => Math.max(most, textWidth([{ text }], font)), 0);
  let px = size.px;
  if (labelled) px = Math.max(px, widest(weights, size.font) + size.dot + 0.7 + gap);
  for (const vector of radical) px = Math.max(px, widest(vector, size.font) + gap);
  for (const { entries } of wires) {
    for (const { value } of entries) px = Math.max(px, 2 * fruitSize(size, value).halfWidth + gap);
  }
  return px;
}

function productWidth(wires: readonly Wire[], size: Size): number {
  let digits = 1;
  for (const { entries, columns } of wires) {
    for (const { value } of entries) digits = Math.max(digits, String(value * value * BigInt(columns.length)).length);
  }
  return (Math.min(digits, 6) + 1.4) * 0.6 * size.font + 0.4 * size.font;
}

function archHeight(size: Size, distance: number): number {
  return 0.55 * size.font + 0.34 * size.py * distance ** 0.62;
}

/** Straight between neighbours, else a flat arch with rounded corners. */
function edgePath(x1: number, x2: number, y: number, rise: number, px: number): readonly PathStep[] {
  if (rise === 0)
    return [
      ['M', x1, y],
      ['L', x2, y],
    ];
  const corner = Math.min(0.55 * px, 1.1 * rise);
  return [
    ['M', x1, y],
    ['C', x1, y - 0.8 * rise, x1 + 0.3 * corner, y - rise, x1 + corner, y - rise],
    ['L', x2 - corner, y - rise],
    ['C', x2 - 0.3 * corner, y - rise, x2, y - 0.8 * rise, x2, y],
  ];
}
