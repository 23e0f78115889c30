/**
 * From a conclusion and the found orbits to the certificate's bytes and the facts that the search keeps. In chunks: the
 * orbits are taken one by one, and what is full is handed over. Whole: for lists that are known to be short.
 */
import {
  stringMatrix,
  type CertificateClaim,
  type CertificateLattice,
  type Exclusion,
  type Tree,
  type TreeBasis,
  type WrittenFile,
} from '@palmette/certificate';
import {
  countColumns,
  gluingOf,
  treeBasis,
  type ArithmeticGroundLike,
  type Basis,
  type Conclusion,
  type FoundOrbit,
  type Plan,
  type StageResult,
} from '@palmette/search';
import { unpackFound } from './found-chunks.ts';
import type { SettledFacts } from './jobs.ts';
import { ListWriter, type KeepChunk } from './list-writer.ts';
import { fixedDimension, sha256, type Understood } from './understand.ts';

export interface Certified {
  readonly facts: SettledFacts;
  readonly certificate: Uint8Array[];
  readonly sha256: string;
}

/** What the certificate's `open` form lists: right as far as it goes, complete in nothing. */
export interface OpenParts {
  readonly dimension: number | null;
  readonly plan: Plan | null;
  readonly found: Iterable<FoundOrbit>;
}

/** What a search that was left open may list: of a least n nothing, because nobody knows yet which n it is. */
export function listedOpen(u: Understood, plan: Plan, chunks: Iterable<Uint8Array>): OpenParts {
  const dimension = fixedDimension(u);
  const listed = dimension !== null || 'any' in u.question.target;
  return { dimension, plan, found: listed ? unpackFound(chunks) : [] };
}

/** A settled search's certificate, held whole. */
export function certify(
  u: Understood,
  plan: Plan | null,
  conclusion: Conclusion,
  results: readonly StageResult[],
  found: Iterable<FoundOrbit>,
): Certified {
  const chunks: Uint8Array[] = [];
  const { facts, ...file } = certifyInChunks(u, plan, conclusion, results, found, (chunk) => chunks.push(chunk));
  return { facts, ...whole(file, chunks) };
}

/** The certificate of a search that was left open, held whole. */
export function certifyOpen(u: Understood, open: OpenParts): Omit<Certified, 'facts'> {
  const chunks: Uint8Array[] = [];
  return whole(
    certifyOpenInChunks(u, open, (chunk) => chunks.push(chunk)),
    chunks,
  );
}

function whole({ head, last }: WrittenFile, chunks: readonly Uint8Array[]): Omit<Certified, 'facts'> {
  const certificate = [head, ...chunks, ...(last === null ? [] : [last])];
  return { certificate, sha256: sha256(Buffer.concat(certificate)) };
}

/**
 * Writes the certificate of a settled search.
 * @param plan null where arithmetic settled the question before a plan was made
 * @param found orbits of the list stage in tree order; for scope `one` the witness
 */
export function certifyInChunks(
  u: Understood,
  plan: Plan | null,
  conclusion: Conclusion,
  results: readonly StageResult[],
  found: Iterable<FoundOrbit>,
  keep: KeepChunk,
): WrittenFile & { readonly facts: SettledFacts } {
  const { lattice, canonical } = u;
  const embeds = conclusion.verdict === 'embeds';
  const anyTarget = 'any' in canonical.target;
  const list = conclusion.listStage === null ? null : results.find((r) => r.no === conclusion.listStage)!;
  const complete = embeds ? conclusion.listComplete : true;
  const dimension = anyTarget ? null : conclusion.dimension;
  const writer = new ListWriter(u, anyTarget ? null : (list?.dimension ?? dimension ?? 0), dimension, keep);
  if (embeds) writer.take(plan!, found, complete ? Number.POSITIVE_INFINITY : 1);
  const { orbits, total } = writer;
  const exclusion = conclusion.exclusion === null ? null : exclusionOf(u, plan, conclusion.exclusion, results);
  const ground = embeds ? (complete ? 'exhaustion' : 'embedding') : exclusion!.ground;
  const claim: CertificateClaim = {
    verdict: conclusion.verdict,
    ground,
    target: canonical.target,
    scope: canonical.scope,
    dimension,
    complete,
    ...(complete ? { orbits: orbits.toString() } : {}),
    ...(complete && !(anyTarget && embeds) ? { total: total.toString() } : {}),
  };
  const evidence = {
    exclusions: exclusion === null ? [] : [exclusion],
    list: embeds && complete ? treeOf(u, plan!, list!) : null,
    ...(canonical.secondOpinion === true ? { second: secondOf(u, plan, conclusion, results) } : {}),
  };
  return {
    ...writer.finish({ lattice: latticeOf(u), claim, evidence }, complete),
    facts: {
      verdict: conclusion.verdict,
      ground,
      complete,
      rank: lattice.rank,
      dimension,
      orbits: complete ? orbits : null,
      total: complete && !(anyTarget && embeds) ? total : null,
    },
  };
}

/** The certificate of a search that was left open: what it lists is right, and it claims nothing else. */
export function certifyOpenInChunks(u: Understood, open: OpenParts, keep: KeepChunk): WrittenFile {
  const { canonical } = u;
  const width = 'any' in canonical.target ? null : (open.dimension ?? 0);
  const writer = new ListWriter(u, width, open.dimension, keep);
  if (open.plan !== null) writer.take(open.plan, open.found);
  const claim: CertificateClaim = {
    verdict: 'open',
    ground: null,
    target: canonical.target,
    scope: canonical.scope,
    dimension: open.dimension,
    complete: false,
  };
  const second = canonical.secondOpinion === true ? { second: null } : {};
  return writer.finish({ lattice: latticeOf(u), claim, evidence: { exclusions: [], list: null, ...second } }, false);
}

/** The tree of the method that was asked first: the list that is written is that of the second. */
function secondOf(
  u: Understood,
  plan: Plan | null,
  conclusion: Conclusion,
  results: readonly StageResult[],
): Tree | null {
  const stage = results.find((r) => r.no === conclusion.secondStage);
  return stage === undefined ? null : treeOf(u, plan!, stage);
}

function treeOf(u: Understood, plan: Plan, result: StageResult): Tree {
  const basis = basisRecord(u, treeBasis(plan, u.reduced.basis));
  if (result.method === 'rows')
    return {
      method: 'rows',
      revision: result.fewest === true ? 2 : 1,
      dimension: result.dimension,
      basis,
      order: plan.order,
      nodes: result.nodes,
      orbits: result.orbits,
    };
  if (result.glue === true) {
    const { primes, glued } = gluingOf(plan, result.dimension)!;
    return {
      method: 'frames',
      revision: 2,
      dimension: result.dimension,
      basis,
      primes: primes.map(String),
      glued: String(glued.length),
      orbits: result.orbits,
    };
  }
  return {
    method: result.method,
    revision: 1,
    dimension: result.method === 'columns' && result.whole ? null : result.dimension,
    basis,
    vectors: String(countColumns(plan, result)),
    orbits: result.orbits,
  };
}

function basisRecord(u: Understood, basis: Basis | null): TreeBasis {
  const size = u.lattice.gram.length;
  return basis === null
    ? null
    : { matrix: stringMatrix(basis.matrix, size), inverse: stringMatrix(basis.inverse, size) };
}

function exclusionOf(
  u: Understood,
  plan: Plan | null,
  exclusion: NonNullable<Conclusion['exclusion']>,
  results: readonly StageResult[],
): Exclusion {
  if (exclusion.arithmetic !== undefined) return arithmeticExclusion(u, exclusion.dimension, exclusion.arithmetic);
  return {
    dimension: exclusion.dimension,
    ground: 'exhaustion',
    tree: treeOf(
      u,
      plan!,
      results.find((r) => r.no === exclusion.stage)!,
    ),
  };
}

function arithmeticExclusion(u: Understood, dimension: number | null, ground: ArithmeticGroundLike): Exclusion {
  if (ground.ground === 'column')
    return {
      dimension,
      ground: 'column',
      basis: basisRecord(u, u.shortBasis()),
      vectors: ground.vectors,
      spanned: ground.spanned,
    };
  return ground.ground === 'hilbert'
    ? { dimension: dimension!, ground: 'hilbert', primes: ground.primes }
    : { dimension: dimension!, ground: ground.ground };
}

function latticeOf(u: Understood): CertificateLattice {
  const { lattice } = u;
  return {
    gram: stringMatrix(lattice.gram, lattice.gram.length),
    sign: lattice.sign,
    ...(lattice.orientation === undefined ? {} : { orientation: lattice.orientation }),
    rank: lattice.rank,
    nullity: lattice.nullity,
    determinant: lattice.determinant.toString(),
    radical: lattice.radical.map((row) => row.map(String)),
  };
}
