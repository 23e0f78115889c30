/**
 * What one types into the first blank of the sentence: 17/5, P(3, 5, -7), M(2/5, 3/7, -4/3), [4, 2, 3], A4, D5, E6,
 * a star as "star -2: 3/2, 5/4", or a matrix in any pasteable form.
 */
import { SourceFault, type Source, type SourceInteger, type TreeSource } from './source.ts';
import { readPasted } from './read-pasted.ts';

const INT = '-?\\d+';

function integers(text: string): SourceInteger[] {
  return [...text.matchAll(/-?\d+/g)].map(([x]) => integer(x));
}

function integer(text: string): SourceInteger {
  const canonical = BigInt(text).toString();
  const small = Number(canonical);
  return Number.isSafeInteger(small) ? small : canonical;
}

function slopes(text: string): [SourceInteger, SourceInteger][] {
  return [...text.matchAll(/(-?\d+)\s*\/\s*(-?\d+)/g)].map(([, q, p]) => [integer(q!), integer(p!)]);
}

/** A chain of −2-weighted or other vertices as a tree source. */
export function chainSource(weights: readonly SourceInteger[]): TreeSource {
  return {
    kind: 'tree',
    vertices: weights.map((weight, i) => ({ name: `v${i + 1}`, weight })),
    edges: weights.slice(1).map((_, i) => [`v${i + 1}`, `v${i + 2}`] as const),
  };
}

/** A_r, D_r (r ≥ 4), E_6, E_7, E_8 as trees of weight −2. */
export function rootLatticeSource(type: 'A' | 'D' | 'E', rank: number): TreeSource {
  const least = { A: 1, D: 4, E: 6 }[type];
  if (rank < least || (type === 'E' && rank > 8))
    throw new SourceFault(
      '',
      `expected ${type} with rank ${type === 'E' ? '6, 7 or 8' : `at least ${least}`}, found ${rank}`,
    );
  const chain = chainSource(new Array<number>(type === 'A' ? rank : rank - 1).fill(-2));
  if (type === 'A') return chain;
  const joint = type === 'D' ? rank - 2 : 3;
  return {
    ...chain,
    vertices: [...chain.vertices, { name: `v${rank}`, weight: -2 }],
    edges: [...chain.edges, [`v${joint}`, `v${rank}`]],
  };
}

/**
 * @throws SourceFault if the text is none of the forms above, or a matrix with a bad entry
 */
export function readSourceText(text: string): Source {
  const plain = text.replaceAll(/[\u2212\u2013\u2010\u2011]/g, '-').trim();
  const match = (pattern: string) => new RegExp(`^${pattern}$`, 'i').exec(plain);
  if (plain === '')
    throw new SourceFault('', 'expected a source such as 17/5, P(3, 5, -7), E6 or a matrix, found nothing');
  const fraction = match(`(?:L\\s*\\(|S\\s*\\()?\\s*(${INT})\\s*[/,]\\s*(${INT})\\s*\\)?`);
  if (fraction !== null && (plain.includes('/') || /^[ls]/i.test(plain)))
    return { kind: 'fraction', p: integer(fraction[1]!), q: integer(fraction[2]!), orientation: 'chain' };
  const pretzel = match(`P\\s*\\((\\s*${INT}(?:\\s*,\\s*${INT})*)\\s*\\)`);
  if (pretzel !== null) return { kind: 'montesinos', pretzel: integers(pretzel[1]!), orientation: 'definite' };
  const strands = match(`M\\s*\\(([-\\d\\s,/]+)\\)`);
  if (strands !== null) return { kind: 'montesinos', slopes: slopes(strands[1]!), orientation: 'definite' };
  const root = match('([ADE])_?\\{?(\\d{1,4})\\}?');
  if (root !== null) return rootLatticeSource(root[1]!.toUpperCase() as 'A' | 'D' | 'E', Number(root[2]));
  const star = match(`star\\s+(${INT})\\s*[:;]\\s*(.*)`);
  if (star !== null)
    return {
      kind: 'seifert',
      centre: integer(star[1]!),
      fibres: slopes(star[2]!).map(([p, q]) => [q, p]),
      orientation: 'definite',
    };
  const chain = match(`\\[?\\s*(${INT}(?:\\s*,\\s*${INT})*)\\s*\\]?`);
  if (chain !== null) return chainSource(integers(chain[1]!).map((a) => (BigInt(a) > 0n ? integer(`-${a}`) : a)));
  if (/^[\s[({\\-]*[-\d]/.test(plain) || plain.includes('\\begin'))
    return { kind: 'matrix', rows: readPasted(plain).rows };
  throw new SourceFault(
    '',
    `expected a source such as 17/5, P(3, 5, -7), E6, a list of weights or a matrix, found ${JSON.stringify(plain.slice(0, 40))}`,
  );
}
