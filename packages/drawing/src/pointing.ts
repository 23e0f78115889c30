/**
 * What pointing shows: which parts are lit, which terms stand at the right, and the caption in words. Inner products are
 * those of the images, so of the positive form.
 */
import type { Mark, Part, TextMark, Tone } from './marks.ts';
import { numeral, signed } from './numerals.ts';
import type { Trellis, TrellisWire } from './trellis.ts';

/** Vertices by place on the bar, wires by line, edges by their number in the trellis. */
export type Aim =
  | { readonly kind: 'vertex'; readonly vertex: number }
  | { readonly kind: 'wire'; readonly wire: number }
  /** `vertex`: the end from which the edge was reached. */
  | { readonly kind: 'edge'; readonly edge: number; readonly vertex?: number }
  | { readonly kind: 'pair'; readonly vertices: readonly [number, number] };

export interface Term {
  readonly wire: number;
  readonly value: bigint;
}

export interface Reading {
  readonly wires: ReadonlySet<number>;
  readonly vertices: ReadonlySet<number>;
  /** −1: none. */
  readonly edge: number;
  /** Entries of these vertices on these wires are lit. */
  readonly terms: readonly Term[];
  /** Null where nothing is added up. */
  readonly sum: bigint | null;
  /** May hold e_{12}, to be set with a real subscript. */
  readonly caption: string;
}

/** Names that one sentence holds; more are counted. */
const NAMED = 8;

export function readAim(trellis: Trellis, aim: Aim): Reading {
  switch (aim.kind) {
    case 'wire':
      return readWire(trellis, aim.wire);
    case 'vertex':
      return readProduct(trellis, aim.vertex, aim.vertex, -1);
    case 'edge': {
      const { from, to } = trellis.edges[aim.edge]!;
      return readProduct(trellis, from, to, aim.edge);
    }
    case 'pair':
      return readProduct(trellis, ...aim.vertices, edgeBetween(trellis, ...aim.vertices));
  }
}

export function edgeBetween(trellis: Trellis, a: number, b: number): number {
  return trellis.edges.findIndex(({ from, to }) => (from === a && to === b) || (from === b && to === a));
}

function readWire(trellis: Trellis, no: number): Reading {
  const wire = trellis.wires[no]!;
  const { entries } = wire;
  const few = entries.length <= NAMED;
  const meets = few ? list(entries.map(({ place }) => trellis.vertices[place]!.name)) : `${entries.length} vertices`;
  const values = entries.slice(0, NAMED).map(({ value }) => signed(value));
  return {
    wires: new Set([no]),
    vertices: new Set(wire.entries.map(({ place }) => place)),
    edge: -1,
    terms: [],
    sum: null,
    caption: `${wireName(wire)} ${wire.columns.length === 1 ? 'meets' : 'meet'} ${meets}: ${values.join(', ')}${few ? '' : ', …'}.`,
  };
}

function readProduct(trellis: Trellis, a: number, b: number, edge: number): Reading {
  const terms: Term[] = [];
  trellis.wires.forEach(({ entries, columns }, wire) => {
    const at = (place: number) => entries.find((entry) => entry.place === place)?.value ?? 0n;
    const value = at(a) * at(b) * BigInt(columns.length);
    if (value !== 0n) terms.push({ wire, value });
  });
  const sum = terms.reduce((total, { value }) => total + value, 0n);
  return {
    wires: new Set(terms.map(({ wire }) => wire)),
    vertices: new Set([a, b]),
    edge,
    terms,
    sum,
    caption: a === b ? vertexCaption(trellis, a, terms, sum) : pairCaption(trellis, a, b, terms, sum, edge),
  };
}

function vertexCaption(trellis: Trellis, place: number, terms: readonly Term[], sum: bigint): string {
  const { name, weight } = trellis.vertices[place]!;
  const minus = trellis.minusAtLeft ? '−' : '';
  const own = `${name}, weight ${minus}${weight.tip ?? weight.text}`;
  if (terms.length === 0) return `${own}, goes to 0.`;
  return `${own}: the squares on ${wireList(trellis, terms)} are ${sumInWords(terms, sum)}.`;
}

function pairCaption(
  trellis: Trellis,
  a: number,
  b: number,
  terms: readonly Term[],
  sum: bigint,
  edge: number,
): string {
  const pair = `${trellis.vertices[a]!.name} and ${trellis.vertices[b]!.name}`;
  const joined = edge >= 0 ? '' : ', without an edge,';
  if (terms.length === 0) return `${pair}${joined} share no wire: their product is 0.`;
  return `${pair}${joined} meet on ${wireList(trellis, terms)}: their product is ${sumInWords(terms, sum)}.`;
}

/** “1 + 1 − 1 = 1”, or the number itself where there is one term. */
function sumInWords(terms: readonly Term[], sum: bigint): string {
  if (terms.length === 1 || terms.length > NAMED) return numeral(sum).text;
  const added = terms.map(({ value }, i) =>
    i === 0 ? numeral(value).text : value < 0n ? ` − ${numeral(-value).text}` : ` + ${numeral(value).text}`,
  );
  return `${added.join('')} = ${numeral(sum).text}`;
}

function wireList(trellis: Trellis, terms: readonly Term[]): string {
  if (terms.length > NAMED) return `${terms.length} wires`;
  return list(terms.map(({ wire }) => wireName(trellis.wires[wire]!)));
}

/** e_6, e_{12}, e_{2…6}. */
function wireName({ label }: TrellisWire): string {
  const number = label[1]!.text;
  return number.length === 1 ? `e_${number}` : `e_{${number}}`;
}

function list(items: readonly string[]): string {
  return items.length <= 1 ? (items[0] ?? '') : `${items.slice(0, -1).join(', ')} and ${items.at(-1)}`;
}

/** The tone in which a mark stands while something is pointed at. */
export function litMark(mark: Mark, reading: Reading): Mark {
  if (!isLit(mark.part, reading)) return dimmed(mark);
  const tone = (own: Tone | null): Tone | null => (own === null || own === 'paper' || own === 'hair' ? own : 'damson');
  switch (mark.kind) {
    case 'line':
      return { ...mark, stroke: tone(mark.stroke)!, width: mark.width * (mark.part.role === 'wire' ? 1.7 : 1) };
    case 'path':
      return {
        ...mark,
        fill: tone(mark.fill),
        stroke: tone(mark.stroke),
        width: mark.width * (mark.part.role === 'edge' ? 1.7 : 1),
      };
    case 'round':
      return { ...mark, fill: tone(mark.fill), stroke: tone(mark.stroke) };
    case 'text':
      return { ...mark, fill: tone(mark.fill)!, weight: mark.weight === 400 ? 500 : mark.weight };
  }
}

function isLit({ role, vertex, wire, edge }: Part, reading: Reading): boolean {
  switch (role) {
    case 'wire':
    case 'label':
    case 'count':
      return reading.wires.has(wire!);
    case 'leaf':
    case 'fruit':
      return reading.wires.has(wire!) && reading.vertices.has(vertex!);
    case 'dot':
    case 'weight':
      return vertex !== undefined && reading.vertices.has(vertex);
    case 'edge':
      return reading.edge === edge;
    default:
      return false;
  }
}

/** Leaves that are not meant step back; all else stays as it is. */
function dimmed(mark: Mark): Mark {
  if (mark.part.role !== 'leaf' && mark.part.role !== 'fruit') return mark;
  const tone = <T extends Tone | null>(own: T): T | 'edge' => (own === 'leaf' ? 'edge' : own);
  if (mark.kind === 'path' || mark.kind === 'round')
    return { ...mark, fill: tone(mark.fill), stroke: tone(mark.stroke) };
  return mark.kind === 'text' ? { ...mark, fill: tone(mark.fill) } : mark;
}

/** The terms at the right of their wires, a line, and their sum. */
export function productMarks(trellis: Trellis, reading: Reading): Mark[] {
  if (reading.sum === null) return [];
  const { size, productX, sumY } = trellis;
  const part: Part = { role: 'product' };
  const text = (y: number, value: bigint): TextMark => {
    const { text: shown, tip } = numeral(value);
    return {
      kind: 'text',
      x: productX,
      y,
      size: size.font,
      weight: 600,
      anchor: 'start',
      fill: 'damson',
      runs: [{ text: shown }],
      ...(tip === undefined ? {} : { tip }),
      part,
    };
  };
  return [
    ...reading.terms.map(({ wire, value }) => text(trellis.wires[wire]!.y + 0.34 * size.font, value)),
    {
      kind: 'line',
      x1: productX - 0.2 * size.font,
      y1: sumY,
      x2: productX + 1.6 * size.font,
      y2: sumY,
      stroke: 'damson',
      width: 1,
      part,
    },
    text(sumY + 1.15 * size.font, reading.sum),
  ];
}
