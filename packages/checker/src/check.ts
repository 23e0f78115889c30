/**
 * The check as its table of contents: file, question, lattice, claim, list, evidence; then the trees, enumerated here or
 * in parcels; then the last line. Everything before the trees is `openCheck`.
 */
import { checkEmbeddings, testNames, type CheckedList } from './embeddings.ts';
import { checkExclusion, checkListTree, checkSecondTree, type CheckedExclusion } from './evidence.ts';
import { openFile } from './file.ts';
import { checkLattice, type CheckedLattice } from './lattice.ts';
import { readClaim, readQuestion, type Claim } from './question.ts';
import { listOf, NotChecked, objectOf, Rejection, stringIntegerOf, type Json } from './reading.ts';
import { openCheckRun, type CheckTree } from './tree.ts';

/** Raised when what the checker verifies, its last line or its checkpoints change. */
export const CHECKER_REVISION = 3;

export interface Outcome {
  readonly verdict: 'VERIFIED' | 'REJECTED' | 'NOT CHECKED';
  /** The whole last line. */
  readonly line: string;
  readonly place?: string;
  readonly reason?: string;
}

/** A certificate whose trees still have to be enumerated. */
export interface CheckWork {
  readonly trees: readonly CheckTree[];
  /** The claim in words, to be said when the trees agree. */
  readonly words: string;
}

export interface TreeCount {
  readonly nodes: string;
  readonly orbits: string;
}

/** @param bytes uncompressed: all of them, or pieces in order, cut anywhere, of which one is held at a time */
export function openCheck(
  bytes: Uint8Array | Iterable<Uint8Array>,
): { readonly outcome: Outcome } | { readonly work: CheckWork } {
  try {
    return { work: readWork(bytes) };
  } catch (error) {
    return { outcome: outcomeOf(error) };
  }
}

/** Puts together what the trees' parcels counted. */
export function concludeCheck(work: CheckWork, counts: readonly TreeCount[]): Outcome {
  try {
    if (counts.length !== work.trees.length)
      throw new NotChecked(`${work.trees.length} trees have to be enumerated, ${counts.length} were`);
    work.trees.forEach((tree, i) => compareTree(tree, BigInt(counts[i]!.nodes), BigInt(counts[i]!.orbits)));
    return { verdict: 'VERIFIED', line: `VERIFIED ${work.words}` };
  } catch (error) {
    return outcomeOf(error);
  }
}

export interface CheckOptions {
  /** Called with the part of the trees that is done, 0 to 1. */
  readonly progress?: (share: number) => void;
}

const SLICE_NODES = 20_000;
/** A node of a tree of columns costs as much as its list is long. */
const SLICE_VECTORS = 16;

/** The whole check in one go. Bytes as for `openCheck`. */
export function check(bytes: Uint8Array | Iterable<Uint8Array>, options: CheckOptions = {}): Outcome {
  const opened = openCheck(bytes);
  if ('outcome' in opened) return opened.outcome;
  try {
    return concludeCheck(opened.work, countTrees(opened.work.trees, options));
  } catch (error) {
    return outcomeOf(error);
  }
}

function countTrees(trees: readonly CheckTree[], options: CheckOptions): TreeCount[] {
  const counts = trees.map((tree, i): TreeCount => {
    const run = openCheckRun(tree, { from: [], to: null });
    const slice = tree.method === 'rows' ? SLICE_NODES : SLICE_VECTORS;
    while (run.advance(slice) === 'more' && run.nodes <= tree.nodes && run.orbits <= tree.orbits)
      options.progress?.((i + run.shareDone) / trees.length);
    return { nodes: run.nodes.toString(), orbits: run.orbits.toString() };
  });
  options.progress?.(1);
  return counts;
}

function compareTree(tree: CheckTree, nodes: bigint, orbits: bigint): void {
  if (orbits !== tree.orbits)
    throw new Rejection(`${tree.place}/orbits`, `${orbits} were enumerated, ${tree.orbits} are claimed`);
  const counted = tree.method === 'rows' ? 'nodes' : tree.primes === undefined ? 'vectors' : 'glued';
  if (nodes !== tree.nodes)
    throw new Rejection(`${tree.place}/${counted}`, `${nodes} were enumerated, ${tree.nodes} are claimed`);
}

function outcomeOf(error: unknown): Outcome {
  if (error instanceof Rejection)
    return {
      verdict: 'REJECTED',
      line: `REJECTED ${error.place}: ${error.reason}`,
      place: error.place,
      reason: error.reason,
    };
  if (error instanceof NotChecked)
    return { verdict: 'NOT CHECKED', line: `NOT CHECKED ${error.message}`, reason: error.message };
  throw error;
}

function readWork(bytes: Uint8Array | Iterable<Uint8Array>): CheckWork {
  const file = openFile(bytes);
  const question = readQuestion(file.head['question']);
  const lattice = checkLattice(question['source']!, file.head['lattice']);
  const claim = readClaim(file.head, question, lattice.rank);
  const list = checkEmbeddings(file, lattice, claim.target.kind === 'any' ? null : claim.dimension);
  const overall = testNames(file.head['tests'], '/tests');
  const trees: CheckTree[] = [];
  const asked = question['secondOpinion'] === true;
  const evidence = objectOf(file.head['evidence'], '/evidence', ['exclusions', 'list', ...(asked ? ['second'] : [])]);
  const exclusions = listOf(evidence['exclusions'], '/evidence/exclusions').map((x, i) =>
    checkExclusion(lattice, x, `/evidence/exclusions/${i}`, trees),
  );
  checkClaim(claim, lattice, list, exclusions, evidence['list']!, trees);
  const second = asked ? checkSecondTree(lattice, evidence['second'], carrier(claim, trees), '/evidence/second') : null;
  if (second !== null) trees.push(second);
  const unverified = [...new Set([...overall, ...list.unverifiedTests])];
  return {
    trees,
    words:
      claimWords(claim, lattice, list) +
      (second === null ? '' : `; two methods agree: ${carrier(claim, trees)!.method} and ${second.method}`) +
      (unverified.length > 0 ? `; tests not checked: ${unverified.join(', ')}` : ''),
  };
}

/** The tree that shows what the claim says: the list's, which comes last, or that of the exclusion. */
function carrier(claim: Claim, trees: readonly CheckTree[]): CheckTree | undefined {
  if (!claim.complete) return undefined;
  return trees.find((t) => t.place === (claim.verdict === 'embeds' ? '/evidence/list' : '/evidence/exclusions/0/tree'));
}

/** FORMAT.md, section 5: which parts belong to which claim. */
function checkClaim(
  claim: Claim,
  lattice: CheckedLattice,
  list: CheckedList,
  exclusions: readonly CheckedExclusion[],
  listTree: Json,
  trees: CheckTree[],
): void {
  const { target, verdict } = claim;
  const fail = (place: string, reason: string): never => {
    throw new Rejection(place, reason);
  };
  if (target.kind === 'fixed' && claim.dimension !== target.dimension)
    fail('/claim/dimension', `expected ${target.dimension}`);
  if (target.kind === 'any' && claim.dimension !== null) fail('/claim/dimension', 'expected null');
  if (verdict === 'open') {
    if (claim.ground !== null || claim.complete || claim.orbits !== undefined || claim.total !== undefined)
      fail('/claim', 'an open claim says nothing');
    if (exclusions.length > 0 || listTree !== null) fail('/evidence', 'an open claim has no evidence');
    if (target.kind === 'least' && claim.dimension !== null) fail('/claim/dimension', 'expected null');
    if (target.kind === 'least' && list.orbits > 0n)
      fail('/embeddings', 'an open search for the least n lists nothing');
    return;
  }
  if (verdict === 'excluded') {
    const [exclusion] = exclusions;
    if (exclusions.length !== 1) return fail('/evidence/exclusions', 'expected one exclusion');
    if (exclusion!.ground !== claim.ground) fail('/claim/ground', `expected ${exclusion!.ground}`);
    if (exclusion!.dimension !== claim.dimension) fail('/evidence/exclusions/0/dimension', 'differs from the claim');
    if (listTree !== null) fail('/evidence/list', 'expected null');
    if (!claim.complete || claim.orbits !== '0' || claim.total !== '0' || list.orbits !== 0n)
      fail('/claim', 'excluded means a complete list of none');
    if (target.kind === 'least' && claim.dimension !== null && claim.dimension !== target.upTo)
      fail('/claim/dimension', 'expected the bound of the target, or null');
    return;
  }
  if (target.kind === 'least') checkLeast(claim, exclusions);
  else if (exclusions.length > 0) fail('/evidence/exclusions', 'expected none');
  if (!claim.complete) {
    if (claim.scope !== 'one') fail('/claim/complete', 'scope all needs a complete list');
    if (claim.ground !== 'embedding') fail('/claim/ground', 'expected embedding');
    if (list.orbits !== 1n) fail('/embeddings', 'expected exactly one');
    if (claim.orbits !== undefined || claim.total !== undefined) fail('/claim', 'an incomplete list has no counts');
    if (listTree !== null) fail('/evidence/list', 'expected null');
    return;
  }
  if (claim.ground !== 'exhaustion') fail('/claim/ground', 'expected exhaustion');
  if (list.orbits === 0n) fail('/embeddings', 'expected at least one');
  if (stringIntegerOf(claim.orbits, '/claim/orbits') !== list.orbits) fail('/claim/orbits', `expected ${list.orbits}`);
  if (target.kind === 'any') {
    if (claim.total !== undefined) fail('/claim/total', 'target any has no total');
  } else if (stringIntegerOf(claim.total, '/claim/total') !== list.total)
    fail('/claim/total', `expected ${list.total}`);
  const tree = checkListTree(lattice, listTree, target.kind === 'any' ? null : claim.dimension, '/evidence/list');
  if (tree.orbits !== list.orbits) fail('/evidence/list/orbits', `expected ${list.orbits}`);
  trees.push(tree);
}

function checkLeast(claim: Claim, exclusions: readonly CheckedExclusion[]): void {
  const { dimension, target } = claim;
  if (dimension === null) throw new Rejection('/claim/dimension', 'expected the least n');
  if (target.kind === 'least' && target.upTo !== null && dimension > target.upTo)
    throw new Rejection('/claim/dimension', 'above the bound of the target');
  const expected = dimension === 0 ? 0 : 1;
  if (exclusions.length !== expected || (expected === 1 && exclusions[0]!.dimension !== dimension - 1))
    throw new Rejection('/evidence/exclusions', `expected what excludes n = ${dimension - 1}`);
}

function claimWords(claim: Claim, lattice: CheckedLattice, list: CheckedList): string {
  const what = `rank ${lattice.rank}${lattice.nullity > 0 ? `, nullity ${lattice.nullity}` : ''}, determinant ${lattice.determinant}`;
  const where =
    claim.dimension === null
      ? claim.verdict === 'excluded'
        ? 'in no dimension'
        : 'in its own dimensions'
      : `in dimension ${claim.dimension}`;
  const found = `${list.orbits} ${list.orbits === 1n ? 'orbit' : 'orbits'}`;
  const least = claim.target.kind === 'least' && claim.verdict === 'embeds' ? ' (the least)' : '';
  if (claim.verdict === 'open') return `${what}: open, nothing is claimed; ${found} listed`;
  if (claim.verdict === 'excluded')
    return `${what}: does not embed ${where === 'in no dimension' ? 'in any dimension' : where}, by ${claim.ground}`;
  if (!claim.complete) return `${what}: embeds ${where}${least}; one embedding, others were not looked for`;
  const total = claim.target.kind === 'any' ? '' : `, ${list.total} in all`;
  return `${what}, ${where}${least}: ${found}${total}, complete`;
}
