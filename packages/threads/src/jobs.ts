/**
 * What a thread can be asked to do, what it says meanwhile and what it answers. Everything here is structured-cloneable.
 * A search goes `choose` → `list` (each parcel) → `assemble` → (`list` of the next stage …) → `open` → `check` (each parcel)
 * → `conclude`. Long lists do not stand in a job: the thread asks for their pieces one at a time while it works.
 */
import type { Ground, Verdict } from '@palmette/contracts';
import type { Stage, StageResult } from '@palmette/search';

/** Shared words between the process and one thread: [0] is a command, [1] the answer to a proposed cut, [2] counts replies. */
export const WORDS = 3;
export const COMMAND = { goOn: 0, yield: 1, stop: 2, cut: 3 } as const;
export const CUT_ANSWER = { none: 0, recorded: 1, refused: 2 } as const;

export interface Interval {
  readonly from: readonly number[];
  readonly to: readonly number[] | null;
}

export interface ParcelPiece extends Interval {
  /** Estimated share of the stage's tree, 0 to 1. */
  readonly share: number;
}

/** Looks at a question; settles at once what is small, else freezes a plan and a first cover. */
export interface ChooseJob {
  readonly kind: 'choose';
  readonly document: string;
  /** CPU time after which a search becomes parcels. It decides how the work runs, never what is answered. */
  readonly quickCpuMs: number;
}

/** Runs one interval of a stage's tree. */
export interface ListJob extends Interval {
  readonly kind: 'list';
  readonly plan: string;
  readonly stage: Stage;
  readonly checkpoint: string | null;
  /** CPU time after which the parcel yields. */
  readonly quantumCpuMs: number;
  readonly checkpointEveryMs: number;
  /** The engine's own count of its memory at which it stops. */
  readonly memoryBytes: number;
}

/**
 * All parcels of a stage are done: the next stage, or the certificate. Asks for what the last stage found and gives the
 * chunks of a large certificate away.
 */
export interface AssembleJob {
  readonly kind: 'assemble';
  readonly document: string;
  readonly plan: string;
  readonly results: readonly StageResult[];
  /** Trees above this many nodes are checked in parcels, others at once. */
  readonly wholeCheckNodes: number;
}

/** What names a certificate to the threads that check it: one that has not opened it asks for its bytes. */
interface Checking {
  /** Hash of the head, which covers everything. */
  readonly certificate: string;
}

/** Checks everything but the trees, and covers these. */
export interface OpenJob extends Checking {
  readonly kind: 'open';
}

/** Runs one interval of the checker's own tree. */
export interface CheckJob extends Interval, Checking {
  readonly kind: 'check';
  readonly tree: number;
  readonly checkpoint: string | null;
  readonly quantumCpuMs: number;
  readonly checkpointEveryMs: number;
}

/** Puts the counts of the checked parcels together: the checker's last word. */
export interface ConcludeJob extends Checking {
  readonly kind: 'conclude';
  /** For each tree of the certificate what its parcels counted. */
  readonly counts: readonly { readonly nodes: string; readonly orbits: string }[];
}

/** One whole question on one thread: for many small ones from the command line. */
export interface AnswerJob {
  readonly kind: 'answer';
  readonly document: string;
  /** The certificate is one line whatever its size. */
  readonly oneLine: boolean;
  /** Bound of the search's own memory. */
  readonly memoryBytes: number;
}

export type Job = ChooseJob | ListJob | AssembleJob | OpenJob | CheckJob | ConcludeJob | AnswerJob;

/** Deltas since the last message. */
export interface CheckpointMessage {
  readonly kind: 'checkpoint';
  readonly checkpoint: string;
  readonly nodes: bigint;
  readonly orbits: bigint;
  readonly cpuMs: number;
  /** Part of the interval that is done, 0 to 1. */
  readonly shareDone: number;
  readonly nodesPerSecond: number | null;
  readonly chunks: readonly { readonly records: number; readonly raw: Uint8Array }[];
}

/** The thread waits for the answer in the shared words. */
export interface CutMessage {
  readonly kind: 'cut';
  readonly mid: readonly number[] | null;
  readonly shareKept: number;
}

/** The thread waits for the next piece: JSON lines of what the last stage found, in address order; or bytes of the certificate. */
export interface NeedMessage {
  readonly kind: 'need';
  readonly of: 'found' | 'certificate';
  /** Counts from 0; 0 again begins anew. */
  readonly no: number;
}

/** The thread waits until a chunk of the certificate that it writes is kept. */
export interface KeepMessage {
  readonly kind: 'keep';
  readonly chunk: Uint8Array;
}

export type JobMessage = CheckpointMessage | CutMessage | NeedMessage | KeepMessage;

/** What a settled search says, beside the certificate's bytes. */
export interface SettledFacts {
  readonly verdict: Exclude<Verdict, 'open'>;
  readonly ground: Ground;
  readonly complete: boolean;
  readonly rank: number;
  readonly dimension: number | null;
  readonly orbits: bigint | null;
  readonly total: bigint | null;
}

export interface CheckerWord {
  readonly verdict: 'VERIFIED' | 'REJECTED' | 'NOT CHECKED';
  readonly line: string;
  readonly revision: number;
  readonly cpuMs: number;
}

export interface StageAhead {
  readonly stage: Stage;
  readonly results: readonly StageResult[];
  readonly estimate: { readonly probes: number; readonly mean: number; readonly low: number; readonly high: number };
  readonly parcels: readonly ParcelPiece[];
}

export interface Refused {
  readonly kind: 'refused';
  readonly code: string;
  readonly message: string;
  readonly path?: string;
}

export interface Settled {
  readonly kind: 'settled';
  readonly facts: SettledFacts;
  readonly certificate: readonly Uint8Array[];
  readonly sha256: string;
  readonly checker: CheckerWord;
  readonly method: string;
  readonly nodes: bigint;
  readonly cpuMs: number;
}

export type ChooseEnd =
  | Refused
  | Settled
  | {
      readonly kind: 'planned';
      readonly rank: number;
      readonly plan: string;
      readonly method: string;
      readonly ahead: StageAhead;
      readonly cpuMs: number;
    };

export interface ListEnd {
  readonly kind: 'done' | 'yielded' | 'stopped' | 'found' | 'memory';
  readonly last: CheckpointMessage;
  /** Bytes that the engine counted, said where `kind` is `memory`. */
  readonly memoryBytes: number;
}

export type AssembleEnd =
  | { readonly kind: 'stage'; readonly ahead: StageAhead; readonly cpuMs: number }
  | Settled
  | {
      readonly kind: 'to check';
      readonly facts: SettledFacts;
      /** The file is the head, the chunks that were given away, in order, and the last line (null: none). */
      readonly head: Uint8Array;
      readonly last: Uint8Array | null;
      readonly cpuMs: number;
    };

export type OpenEnd =
  | {
      readonly kind: 'opened';
      /** Cover of every tree of the certificate, in the checker's own addresses. */
      readonly parcels: readonly (ParcelPiece & { readonly tree: number })[];
      readonly cpuMs: number;
    }
  | { readonly kind: 'not accepted'; readonly checker: CheckerWord };

export interface CheckEnd {
  readonly kind: 'done' | 'yielded' | 'stopped';
  readonly last: CheckpointMessage;
  readonly memoryBytes: number;
}

export interface ConcludeEnd {
  readonly checker: CheckerWord;
  /** Hash of the bytes that were checked. */
  readonly sha256: string;
}

export type AnswerEnd =
  | Refused
  | {
      readonly kind: 'answer';
      readonly certificate: readonly Uint8Array[];
      readonly settled: boolean;
      /** Why it is open, in words; absent where it is settled. */
      readonly reason?: string;
    };

export type JobEnd<J extends Job> = J extends ChooseJob
  ? ChooseEnd
  : J extends ListJob
    ? ListEnd
    : J extends AssembleJob
      ? AssembleEnd
      : J extends OpenJob
        ? OpenEnd
        : J extends CheckJob
          ? CheckEnd
          : J extends ConcludeJob
            ? ConcludeEnd
            : AnswerEnd;
