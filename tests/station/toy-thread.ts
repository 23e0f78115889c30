/** The toy's thread: the same jobs, messages and shared words as the real one. */
import { parentPort, type MessagePort } from 'node:worker_threads';
import {
  askOver,
  pieces,
  sha256,
  type Ask,
  type AssembleEnd,
  type CheckJob,
  type CheckpointMessage,
  type ChooseEnd,
  type Job,
  type JobEnd,
  type JobMessage,
  type ListEnd,
  type ListJob,
  type SettledFacts,
  type StageAhead,
} from '@palmette/threads';
import { isFound, readToy, toyBytes, TOY_PARCELS, type ToyPlan } from './toy-question.ts';

export interface ToyTask {
  readonly job: Job;
  readonly words: SharedArrayBuffer;
  readonly port: MessagePort;
}

const LINE = 'the toy checker has counted again';

parentPort!.on('message', ({ job, words, port }: ToyTask) => {
  const shared = new Int32Array(words);
  const end = runToy(job, shared, (message) => port.postMessage(message), askOver(port, shared));
  port.postMessage({ kind: 'end', end });
  port.close();
  parentPort!.postMessage('free');
});

function runToy(job: Job, words: Int32Array, say: (message: JobMessage) => void, ask: Ask): JobEnd<Job> {
  switch (job.kind) {
    case 'choose':
      return choose(readToy(job.document));
    case 'list':
      return count(job, words, say, JSON.parse(job.plan) as ToyPlan, false);
    case 'assemble':
      return assemble(readToy(job.document), job, ask);
    case 'open': {
      const half = Math.floor(planOf(ask).n / 2);
      const parcels = [
        { tree: 0, from: [], to: [half], share: 0.5 },
        { tree: 0, from: [half], to: null, share: 0.5 },
      ];
      return { kind: 'opened', parcels, cpuMs: 1 };
    }
    case 'check':
      return count(job, words, say, planOf(ask), true);
    case 'conclude': {
      const bytes = read(ask);
      const good = job.counts[0]!.nodes === String(planIn(bytes).n);
      return {
        checker: { verdict: good ? 'VERIFIED' : 'REJECTED', line: LINE, revision: 1, cpuMs: 0 },
        sha256: sha256(bytes),
      };
    }
    case 'answer':
      throw new Error('the toy has no command line');
  }
}

function choose(plan: ToyPlan): ChooseEnd {
  if (plan.n === 0)
    return { kind: 'refused', code: 'source', message: 'expected something to count', path: '/source/p' };
  if (plan.quick) {
    const found = Array.from({ length: plan.n }, (_, i) => i).filter(isFound);
    return { kind: 'settled', ...certified(plan, found), nodes: BigInt(plan.n), method: 'counted at once', cpuMs: 1 };
  }
  return {
    kind: 'planned',
    rank: 3,
    plan: JSON.stringify(plan),
    method: 'counted',
    ahead: ahead(plan, 0, []),
    cpuMs: 1,
  };
}

function ahead(plan: ToyPlan, no: number, results: StageAhead['results']): StageAhead {
  const edge = (k: number) => [Math.floor((plan.n * k) / (plan.lopsided ? 100 : TOY_PARCELS))];
  return {
    stage: {
      no,
      dimension: 3 + no,
      purpose: plan.oneAt === null ? 'all' : 'one',
      whole: false,
      method: 'rows',
      why: 'counted',
    },
    results,
    estimate: { probes: 1, mean: plan.n, low: plan.n, high: plan.n },
    parcels: Array.from({ length: TOY_PARCELS }, (_, k) => ({
      from: k === 0 ? [] : edge(k),
      to: k === TOY_PARCELS - 1 ? null : edge(k + 1),
      share: 1 / TOY_PARCELS,
    })),
  };
}

function assemble(plan: ToyPlan, job: Extract<Job, { kind: 'assemble' }>, ask: Ask): AssembleEnd {
  if (job.results.length < plan.stages)
    return { kind: 'stage', ahead: ahead(plan, job.results.length, job.results), cpuMs: 1 };
  const found = [...pieces('found', ask)].flatMap((raw) =>
    new TextDecoder()
      .decode(raw)
      .split('\n')
      .filter((line) => line !== '')
      .map(Number),
  );
  const done = certified(plan, plan.oneAt === null ? found : found.slice(0, 1));
  if (!plan.longCheck && plan.chunkMs === null)
    return { kind: 'settled', ...done, nodes: BigInt(job.results[0]!.nodes), method: 'counted', cpuMs: 1 };
  const [whole] = done.certificate;
  const file = plan.chunkMs === null ? { head: whole!, last: null } : inChunks(whole!, plan.chunkMs, ask);
  return { kind: 'to check', facts: done.facts, ...file, cpuMs: 1 };
}

const CHUNK_BYTES = 16;

/** The bytes as head, chunks and last line, the chunks given away one by one. */
function inChunks(whole: Uint8Array, chunkMs: number, ask: Ask): { head: Uint8Array; last: Uint8Array } {
  const end = whole.length - CHUNK_BYTES;
  for (let at = CHUNK_BYTES; at < end; at += CHUNK_BYTES) {
    spin(chunkMs * 1000);
    ask({ kind: 'keep', chunk: whole.slice(at, Math.min(end, at + CHUNK_BYTES)) });
  }
  return { head: whole.slice(0, CHUNK_BYTES), last: whole.slice(end) };
}

function certified(plan: ToyPlan, found: readonly number[]) {
  const raw = new TextEncoder().encode(toyBytes(plan, found));
  const facts: SettledFacts = {
    verdict: 'embeds',
    ground: 'exhaustion',
    complete: plan.oneAt === null,
    rank: 3,
    dimension: 3,
    orbits: plan.oneAt === null ? BigInt(found.length) : null,
    total: plan.oneAt === null ? BigInt(found.length) : null,
  };
  return {
    facts,
    certificate: [raw],
    sha256: sha256(raw),
    checker: { verdict: plan.rejected ? 'REJECTED' : 'VERIFIED', line: LINE, revision: 1, cpuMs: 1 } as const,
  };
}

const read = (ask: Ask): Uint8Array => Buffer.concat([...pieces('certificate', ask)]);
const planOf = (ask: Ask): ToyPlan => planIn(read(ask));

function planIn(certificate: Uint8Array): ToyPlan {
  const { n } = JSON.parse(new TextDecoder().decode(certificate)) as { n: number };
  return readToy(JSON.stringify({ source: { p: n } }));
}

/** Counts through an interval: from its checkpoint, with messages, a quantum, cuts and commands. */
function count(
  job: ListJob | CheckJob,
  words: Int32Array,
  say: (m: JobMessage) => void,
  plan: ToyPlan,
  silent: boolean,
): ListEnd {
  const start = job.from[0] ?? 0;
  let stop = job.to === null ? plan.n : job.to[0]!;
  let i =
    job.checkpoint === null || job.checkpoint === '' ? start : (JSON.parse(job.checkpoint) as { next: number }).next;
  const began = performance.now();
  let told = { i, at: began };
  let found: number[] = [];
  const message = (): CheckpointMessage => {
    const now = performance.now();
    const nodes = i - told.i;
    const out: CheckpointMessage = {
      kind: 'checkpoint',
      checkpoint: JSON.stringify({ next: i }),
      nodes: BigInt(nodes),
      orbits: BigInt(found.length),
      cpuMs: now - told.at,
      shareDone: (i - start) / Math.max(1, stop - start),
      nodesPerSecond: null,
      chunks:
        found.length === 0 ? [] : [{ records: found.length, raw: new TextEncoder().encode(`${found.join('\n')}\n`) }],
    };
    told = { i, at: now };
    found = [];
    return out;
  };
  const end = (kind: ListEnd['kind']): ListEnd => ({ kind, last: message(), memoryBytes: 0 });
  for (; i < stop;) {
    if (i === plan.crashAt && !silent) process.exit(7);
    spin(plan.spin);
    if (!silent && (plan.oneAt === null ? isFound(i) : i === plan.oneAt)) found.push(i);
    i += 1;
    if (!silent && i - 1 === plan.oneAt) return end('found');
    if (plan.deaf) continue;
    const command = Atomics.load(words, 0);
    if (command === 2) return end('stopped');
    if (command === 1 || performance.now() - began > job.quantumCpuMs) return end('yielded');
    if (command === 3) {
      Atomics.compareExchange(words, 0, 3, 0);
      const mid = i + Math.floor((stop - i) / 2);
      if (silent || mid <= i || mid >= stop) say({ kind: 'cut', mid: null, shareKept: 1 });
      else {
        Atomics.store(words, 1, 0);
        say({ kind: 'cut', mid: [mid], shareKept: (mid - start) / (stop - start) });
        Atomics.wait(words, 1, 0, 30_000);
        if (Atomics.load(words, 1) === 1) stop = mid;
      }
    }
    if (performance.now() - told.at > job.checkpointEveryMs) say(message());
  }
  return end('done');
}

function spin(microseconds: number): void {
  for (const end = performance.now() + microseconds / 1000; performance.now() < end;);
}
