/** Builds the form of a source as typed; conventions of FORMAT.md, section 3. Written apart from the product's own builder. */
import { gcdOf, square } from './arithmetic.ts';
import { diagramForm, graphForm } from './link-sources.ts';
import { integerOf, listOf, NotChecked, objectOf, oneOf, Rejection, type Json } from './reading.ts';

export interface Built {
  readonly form: bigint[][];
  readonly orientation?: 'entered' | 'reversed';
}

/** The checker's documented limit on rows. */
const MAX_ROWS = 4_000;

export function buildSource(value: Json, place: string): Built {
  const kind = oneOf((value as { kind?: Json } | null)?.kind, `${place}/kind`, [
    'matrix',
    'tree',
    'fraction',
    'seifert',
    'montesinos',
    'diagram',
    'graph',
    'sum',
  ]);
  switch (kind) {
    case 'matrix':
      return { form: matrixForm(value, place) };
    case 'tree':
      return { form: treeForm(value, place) };
    case 'fraction':
      return { form: fractionForm(value, place) };
    case 'seifert': {
      const o = objectOf(value, place, ['kind', 'centre', 'fibres', 'orientation']);
      return star(
        integerOf(o['centre'], `${place}/centre`),
        slopesOf(o['fibres'], `${place}/fibres`, false),
        o['orientation'],
        place,
      );
    }
    case 'montesinos':
      return montesinos(value, place);
    case 'diagram':
      return { form: diagramForm(value, place) };
    case 'graph':
      return { form: graphForm(value, place) };
    case 'sum': {
      const o = objectOf(value, place, ['kind', 'of']);
      return {
        form: blockSum(listOf(o['of'], `${place}/of`).map((part, i) => buildSource(part, `${place}/of/${i}`).form)),
      };
    }
  }
}

function matrixForm(value: Json, place: string): bigint[][] {
  const o = objectOf(value, place, ['kind', 'rows']);
  const form = listOf(o['rows'], `${place}/rows`).map((row, i) =>
    listOf(row, `${place}/rows/${i}`).map((x, j) => integerOf(x, `${place}/rows/${i}/${j}`)),
  );
  if (form.length === 0) throw new Rejection(`${place}/rows`, 'no rows');
  if (form.length > MAX_ROWS) throw new NotChecked(`more than ${MAX_ROWS} rows`);
  form.forEach((row, i) => {
    if (row.length !== form.length) throw new Rejection(`${place}/rows/${i}`, 'not square');
    for (let j = 0; j < i; j += 1)
      if (row[j] !== form[j]![i]) throw new Rejection(`${place}/rows/${i}/${j}`, 'not symmetric');
  });
  return form;
}

function treeForm(value: Json, place: string): bigint[][] {
  const o = objectOf(value, place, ['kind', 'vertices', 'edges']);
  const names = new Map<string, number>();
  const weights = listOf(o['vertices'], `${place}/vertices`).map((v, i) => {
    const vertex = objectOf(v, `${place}/vertices/${i}`, ['name', 'weight']);
    const name = vertex['name'];
    if (typeof name !== 'string' || names.has(name))
      throw new Rejection(`${place}/vertices/${i}/name`, 'expected a name of its own');
    names.set(name, i);
    return integerOf(vertex['weight'], `${place}/vertices/${i}/weight`);
  });
  if (weights.length > MAX_ROWS) throw new NotChecked(`more than ${MAX_ROWS} rows`);
  const form = square(weights.length);
  weights.forEach((w, i) => (form[i]![i] = w));
  listOf(o['edges'], `${place}/edges`).forEach((e, k) => {
    const edge = listOf(e, `${place}/edges/${k}`);
    const [i, j] = [names.get(edge[0] as string), names.get(edge[1] as string)];
    const sign = edge[2] ?? 1;
    if (i === undefined || j === undefined || i === j || edge.length > 3 || (sign !== 1 && sign !== -1))
      throw new Rejection(`${place}/edges/${k}`, 'no edge between two vertices');
    if (form[i]![j] !== 0n) throw new Rejection(`${place}/edges/${k}`, 'an edge twice');
    form[i]![j] = BigInt(sign);
    form[j]![i] = BigInt(sign);
  });
  return form;
}

/** Entries of p/q = a_1 − 1/(a_2 − …), p > q > 0. */
function entriesOf(p: bigint, q: bigint, place: string): bigint[] {
  const out: bigint[] = [];
  for (let [a, b] = [p, q]; b !== 0n;) {
    const c = (a - 1n) / b + 1n;
    out.push(c);
    if (out.length > MAX_ROWS) throw new NotChecked(`${place}: more than ${MAX_ROWS} rows`);
    [a, b] = [b, c * b - a];
  }
  return out;
}

function fractionForm(value: Json, place: string): bigint[][] {
  const o = objectOf(value, place, ['kind', 'p', 'q', 'orientation']);
  const p = integerOf(o['p'], `${place}/p`);
  const q = integerOf(o['q'], `${place}/q`);
  const dual = oneOf(o['orientation'], `${place}/orientation`, ['chain', 'dual']) === 'dual';
  if (p === 1n && q === 0n) return [];
  if (q <= 0n || p <= q || gcdOf(p, q) !== 1n) throw new Rejection(place, 'p > q > 0 coprime does not hold');
  return starForm([], [entriesOf(p, dual ? p - q : q, place)]);
}

/** Legs that hang on the first of `centre` (none: the legs stand alone). */
function starForm(centre: readonly bigint[], legs: readonly (readonly bigint[])[]): bigint[][] {
  const weights = [...centre, ...legs.flatMap((leg) => leg.map((a) => -a))];
  if (weights.length > MAX_ROWS) throw new NotChecked(`more than ${MAX_ROWS} rows`);
  const form = square(weights.length);
  weights.forEach((w, i) => (form[i]![i] = w));
  let at = centre.length;
  for (const leg of legs) {
    leg.forEach((_, i) => {
      const before = i > 0 ? at + i - 1 : centre.length > 0 ? 0 : -1;
      if (before < 0) return;
      form[at + i]![before] = 1n;
      form[before]![at + i] = 1n;
    });
    at += leg.length;
  }
  return form;
}

type Slope = readonly [q: bigint, p: bigint];

function slopesOf(value: Json | undefined, place: string, nonzero: boolean): Slope[] {
  return listOf(value, place).map((pair, i) => {
    const two = listOf(pair, `${place}/${i}`);
    const q = integerOf(two[0], `${place}/${i}/0`);
    const p = integerOf(two[1], `${place}/${i}/1`);
    if (two.length !== 2 || p === 0n || gcdOf(q, p) !== 1n || (nonzero && q === 0n))
      throw new Rejection(`${place}/${i}`, 'no slope in lowest terms');
    return p < 0n ? [-q, -p] : [q, p];
  });
}

function montesinos(value: Json, place: string): Built {
  const o = objectOf(value, place, ['kind', 'slopes?', 'pretzel?', 'orientation']);
  if ((o['slopes'] === undefined) === (o['pretzel'] === undefined))
    throw new Rejection(place, 'expected slopes or pretzel');
  const slopes =
    o['slopes'] !== undefined
      ? slopesOf(o['slopes'], `${place}/slopes`, true)
      : listOf(o['pretzel'], `${place}/pretzel`).map((a, i): Slope => {
          const strands = integerOf(a, `${place}/pretzel/${i}`);
          if (strands === 0n) throw new Rejection(`${place}/pretzel/${i}`, 'zero');
          return strands < 0n ? [-1n, -strands] : [1n, strands];
        });
  return star(0n, slopes, o['orientation'], place);
}

function star(centre: bigint, slopes: readonly Slope[], orientation: Json | undefined, place: string): Built {
  const asked = oneOf(orientation, `${place}/orientation`, ['entered', 'reversed', 'definite']);
  let [n, d] = [centre, 1n];
  for (const [q, p] of slopes) [n, d] = [n * p + q * d, d * p];
  const reversed = asked === 'reversed' || (asked === 'definite' && n > 0n);
  const turn = reversed ? -1n : 1n;
  let weight = turn * centre;
  const legs: bigint[][] = [];
  for (const [q, p] of slopes) {
    const top = turn * q;
    const rest = ((top % p) + p) % p;
    weight += (top - rest) / p;
    if (rest !== 0n) legs.push(entriesOf(p, rest, place));
  }
  return { form: starForm([weight], legs), orientation: reversed ? 'reversed' : 'entered' };
}

function blockSum(parts: readonly (readonly (readonly bigint[])[])[]): bigint[][] {
  const size = parts.reduce((sum, part) => sum + part.length, 0);
  if (size > MAX_ROWS) throw new NotChecked(`more than ${MAX_ROWS} rows`);
  const form = square(size);
  let at = 0;
  for (const part of parts) {
    part.forEach((row, i) => row.forEach((x, j) => (form[at + i]![at + j] = x)));
    at += part.length;
  }
  return form;
}
