/**
 * The loop that search and check parcels share: advance a little, look at the command and the clock, leave a
 * checkpoint every few seconds, sooner where much was found. The clock and what is held decide when to report and when
 * to yield, nothing else.
 */
import { CpuMeter } from './cpu-meter.ts';
import { COMMAND, CUT_ANSWER, type CheckpointMessage, type JobMessage } from './jobs.ts';

/** Work between two looks at the command: a few milliseconds. Less while every slice finds much. */
const SLICE_NODES = 2_000;
const FIRST_SLICE_NODES = 125;
/** What one slice may find before slices get shorter, and what is held before it is handed over, whatever the clock says. */
const SLICE_BYTES = 2 * 1024 * 1024;
const HELD_BYTES = 8 * 1024 * 1024;
/** A cut that nobody answers in this time was not recorded. */
const CUT_PATIENCE_MS = 30_000;

export interface Paceable {
  advance(nodes: number): 'more' | 'done' | 'found';
  checkpoint(): string;
  readonly nodes: bigint | number;
  readonly orbits: bigint | number;
  readonly shareDone: number;
  readonly bytes?: number;
  giveAway?(): { readonly mid: readonly number[]; readonly shareKept: number } | null;
  shorten?(to: readonly number[]): void;
}

/** How a run talks to the process. */
export interface Talk {
  /** Words shared with the process: [0] command, [1] answer to a cut. */
  readonly words: Int32Array;
  readonly say: (message: JobMessage) => void;
}

/** What a run has found and nobody has taken yet. */
export interface Findings {
  /** Takes them out of the run and packs them. */
  collect(): void;
  readonly bytes: number;
  take(): CheckpointMessage['chunks'];
}

export interface Pace extends Talk {
  readonly quantumCpuMs: number;
  readonly checkpointEveryMs: number;
  readonly memoryBytes: number;
  /** Null for a run that only counts. */
  readonly findings: Findings | null;
}

export interface PacedEnd {
  readonly kind: 'done' | 'yielded' | 'stopped' | 'found' | 'memory';
  readonly last: CheckpointMessage;
  readonly memoryBytes: number;
}

export function paceRun(run: Paceable, pace: Pace): PacedEnd {
  const meter = new CpuMeter();
  const start = { nodes: BigInt(run.nodes), orbits: BigInt(run.orbits) };
  const told = { ...start, cpuMs: 0 };
  let lastSaid = performance.now();

  const message = (): CheckpointMessage => {
    const cpuMs = meter.ms;
    const nodes = BigInt(run.nodes);
    const orbits = BigInt(run.orbits);
    const out: CheckpointMessage = {
      kind: 'checkpoint',
      checkpoint: run.checkpoint(),
      nodes: nodes - told.nodes,
      orbits: orbits - told.orbits,
      cpuMs: cpuMs - told.cpuMs,
      shareDone: run.shareDone,
      nodesPerSecond: cpuMs < 50 ? null : (Number(nodes - start.nodes) * 1000) / cpuMs,
      chunks: pace.findings?.take() ?? [],
    };
    Object.assign(told, { nodes, orbits, cpuMs });
    return out;
  };
  const end = (kind: PacedEnd['kind']): PacedEnd => ({ kind, last: message(), memoryBytes: run.bytes ?? 0 });

  let slice = FIRST_SLICE_NODES;
  for (;;) {
    const step = run.advance(slice);
    const held = collect(pace.findings);
    slice = Math.max(1, Math.min(SLICE_NODES, held.now > SLICE_BYTES ? slice >> 1 : slice << 1));
    if (step !== 'more') return end(step);
    const command = Atomics.load(pace.words, 0);
    if (command === COMMAND.stop) return end('stopped');
    if (command === COMMAND.yield || meter.ms > pace.quantumCpuMs) return end('yielded');
    if ((run.bytes ?? 0) > pace.memoryBytes) return end('memory');
    if (command === COMMAND.cut) proposeCut(run, pace);
    if (held.inAll > HELD_BYTES || performance.now() - lastSaid > pace.checkpointEveryMs) {
      pace.say(message());
      lastSaid = performance.now();
    }
  }
}

/** Bytes that the last slice found, and that are held now. */
function collect(findings: Findings | null): { readonly now: number; readonly inAll: number } {
  if (findings === null) return { now: 0, inAll: 0 };
  const before = findings.bytes;
  findings.collect();
  return { now: findings.bytes - before, inAll: findings.bytes };
}

/** Proposes a cut and waits until the process has recorded or refused it: only a recorded cut shortens the run. */
function proposeCut(run: Paceable, pace: Pace): void {
  Atomics.compareExchange(pace.words, 0, COMMAND.cut, COMMAND.goOn);
  const offer = run.giveAway?.() ?? null;
  Atomics.store(pace.words, 1, CUT_ANSWER.none);
  pace.say({ kind: 'cut', mid: offer?.mid ?? null, shareKept: offer?.shareKept ?? 1 });
  if (offer === null) return;
  Atomics.wait(pace.words, 1, CUT_ANSWER.none, CUT_PATIENCE_MS);
  if (Atomics.load(pace.words, 1) === CUT_ANSWER.recorded) run.shorten!(offer.mid);
}
