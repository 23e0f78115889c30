/** From a conclusion and the found orbits to the certificate's bytes and the facts that the search keeps. */
import {
  CertificateWriter,
  stringMatrix,
  type CertificateClaim,
  type CertificateEvidence,
  type CertificateLattice,
  type EmbeddingRecord,
  type Exclusion,
  type TestResult,
  type Tree,
  type TreeBasis,
} from '@palmette/certificate';
import { TestsOnList } from '@palmette/lattice';
import {
  countColumns,
  embeddingMatrix,
  orbitSize,
  treeBasis,
  type ArithmeticGroundLike,
  type Basis,
  type Conclusion,
  type FoundOrbit,
  type Plan,
  type StageResult,
} from '@palmette/search';
import type { SettledFacts } from './jobs.ts';
import { sha256, type Understood } from './understand.ts';

export interface Certified {
  readonly facts: SettledFacts;
  readonly certificate: Uint8Array[];
  readonly sha256: string;
}

/** What the certificate's `open` form lists: right as far as it goes, complete in nothing. */
export interface OpenParts {
  readonly dimension: number | null;
  readonly plan: Plan | null;
  readonly found: readonly FoundOrbit[];
}

/**
 * Writes the certificate of a settled search.
 * @param plan null where arithmetic settled the question before a plan was made
 * @param found orbits of the list stage in tree order; for scope `one` the witness
 */
export function certify(
  u: Understood,
  plan: Plan | null,
  conclusion: Conclusion,
  results: readonly StageResult[],
  found: readonly FoundOrbit[],
): Certified {
  const { lattice, canonical } = u;
  const embeds = conclusion.verdict === 'embeds';
  const anyTarget = 'any' in canonical.target;
  const list = conclusion.listStage === null ? null : results.find((r) => r.no === conclusion.listStage)!;
  const complete = embeds ? conclusion.listComplete : true;
  const kept = embeds ? (complete ? found : found.slice(0, 1)) : [];
  const width = list?.dimension ?? conclusion.dimension ?? 0;
  const records = recordsOf(u, plan, kept, anyTarget ? null : width);
  const exclusion = conclusion.exclusion === null ? null : exclusionOf(u, plan, conclusion.exclusion, results);
  const total = records.reduce((sum, r) => sum + r.orbitSize, 0n);
  const orbits = BigInt(records.length);
  const ground = embeds ? (complete ? 'exhaustion' : 'embedding') : exclusion!.ground;
  const claim: CertificateClaim = {
    verdict: conclusion.verdict,
    ground,
    target: canonical.target,
    scope: canonical.scope,
    dimension: anyTarget ? null : conclusion.dimension,
    complete,
    ...(complete ? { orbits: orbits.toString() } : {}),
    ...(complete && !(anyTarget && embeds) ? { total: total.toString() } : {}),
  };
  const evidence = {
    exclusions: exclusion === null ? [] : [exclusion],
    list: embeds && complete ? treeOf(u, plan!, list!) : null,
    ...(canonical.secondOpinion === true ? { second: secondOf(u, plan, conclusion, results) } : {}),
  };
  const bytes = write(u, claim, records, complete, evidence);
  return {
    ...bytes,
    facts: {
      verdict: conclusion.verdict,
      ground,
      complete,
      rank: lattice.rank,
      dimension: claim.dimension,
      orbits: complete ? orbits : null,
      total: complete && !(anyTarget && embeds) ? total : null,
    },
  };
}

/** The certificate of a search that was left open: what it lists is right, and it claims nothing else. */
export function certifyOpen(u: Understood, open: OpenParts): Omit<Certified, 'facts'> {
  const { canonical } = u;
  const records = recordsOf(u, open.plan, open.found, 'any' in canonical.target ? null : (open.dimension ?? 0));
  const claim: CertificateClaim = {
    verdict: 'open',
    ground: null,
    target: canonical.target,
    scope: canonical.scope,
    dimension: open.dimension,
    complete: false,
  };
  const second = canonical.secondOpinion === true ? { second: null } : {};
  return write(u, claim, records, false, { exclusions: [], list: null, ...second });
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

function write(
  u: Understood,
  claim: CertificateClaim,
  records: EmbeddingRecord[],
  complete: boolean,
  evidence: CertificateEvidence,
): Omit<Certified, 'facts'> {
  const writer = new CertificateWriter(sha256, u.oneLine);
  const tests = testResults(u, records, complete, claim.dimension);
  records.forEach((record, i) => writer.add({ ...record, tests: tests.each[i] ?? {} }));
  const certificate = writer.finish({
    question: { ...u.canonical },
    lattice: latticeOf(u),
    claim,
    tests: tests.overall,
    evidence,
  });
  const hash = sha256(Buffer.concat(certificate));
  return { certificate, sha256: hash };
}

function testResults(
  u: Understood,
  records: readonly EmbeddingRecord[],
  complete: boolean,
  dimension: number | null,
): { overall: Record<string, TestResult>; each: Record<string, TestResult>[] } {
  if (u.canonical.tests.length === 0) return { overall: {}, each: [] };
  const tests = new TestsOnList({ lattice: u.lattice, dimension, tests: u.canonical.tests });
  const each = records.map((r) => tests.take({ rows: r.rows, zeros: r.zeros }));
  return { overall: tests.overall(complete), each };
}

function recordsOf(
  u: Understood,
  plan: Plan | null,
  found: readonly FoundOrbit[],
  dimension: number | null,
): EmbeddingRecord[] {
  return found.map((orbit) => {
    const { rows } = embeddingMatrix(plan!, orbit, u.reduced.basis);
    const columns = rows[0]?.length ?? 0;
    const zeros = dimension === null ? 0 : dimension - columns;
    return { rows, zeros, orbitSize: orbitSize(orbit, columns + zeros), tests: {} };
  });
}

function treeOf(u: Understood, plan: Plan, result: StageResult): Tree {
  const basis = basisRecord(u, treeBasis(plan, u.reduced.basis));
  if (result.method === 'rows')
    return {
      method: 'rows',
      revision: 1,
      dimension: result.dimension,
      basis,
      order: plan.order,
      nodes: result.nodes,
      orbits: result.orbits,
    };
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
