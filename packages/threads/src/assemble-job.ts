/** All parcels of a stage are done: the next stage, or the certificate, written chunk by chunk as the list is read. */
import { nextStep, readPlan, type FoundOrbit, type StageResult } from '@palmette/search';
import { pieces, type Ask } from './asking.ts';
import { certifyInChunks } from './certify.ts';
import { checkAtOnce } from './check-whole.ts';
import { ahead, methodWords, stageResult } from './choose.ts';
import { CpuMeter } from './cpu-meter.ts';
import { unpackFound } from './found-chunks.ts';
import type { AssembleEnd, AssembleJob } from './jobs.ts';
import { sha256, understand } from './understand.ts';

export function assemble(job: AssembleJob, ask: Ask): AssembleEnd {
  const meter = new CpuMeter();
  const understood = understand(job.document);
  const plan = readPlan(job.plan);
  const found = unpackFound(pieces('found', ask));
  const results = plan.secondOpinion ? withSet(job.results, found) : job.results;
  const step = nextStep(plan, results, understood.arithmetic);
  if ('stage' in step)
    return { kind: 'stage', ahead: ahead(plan, step.stage, results, understood.seed), cpuMs: meter.ms };
  const keep = (chunk: Uint8Array) => void ask({ kind: 'keep', chunk });
  const { facts, head, last } = certifyInChunks(understood, plan, step.conclusion, results, found, keep);
  const nodes = results.reduce((sum, r) => sum + BigInt(r.nodes), 0n);
  if (last !== null || weightOf(results) > BigInt(job.wholeCheckNodes))
    return { kind: 'to check', facts, head, last, cpuMs: meter.ms };
  return {
    kind: 'settled',
    facts,
    certificate: [head],
    sha256: sha256(head),
    checker: checkAtOnce([head]),
    method: methodWords(results),
    nodes,
    cpuMs: meter.ms,
  };
}

/** A node of frames or columns looks at a whole list of candidates: its check costs as much as that of so many nodes of rows. */
const VECTOR_NODE = 200n;

/** Nodes of all stages, weighed by what their check costs. */
function weightOf(results: readonly StageResult[]): bigint {
  return results.reduce((sum, r) => sum + BigInt(r.nodes) * (r.method === 'rows' ? 1n : VECTOR_NODE), 0n);
}

/** The last stage's result with the set of its orbits, for the second opinion to compare. */
function withSet(results: readonly StageResult[], found: Iterable<FoundOrbit>): StageResult[] {
  const last = results.at(-1)!;
  const counts = { nodes: BigInt(last.nodes), orbits: BigInt(last.orbits) };
  return [...results.slice(0, -1), stageResult(last, counts, last.complete, found)];
}
