/**
 * A parcel while this station holds it: its lease, the job that runs it, and what has been asked of it. Advice goes to
 * the thread as a flag first; a thread that does not answer is ended.
 */
import type { Advice, Lease } from '@palmette/store';
import type { Job, JobEnd, RunningJob } from '@palmette/threads';

/** From the flag to the end of the thread. A withdrawn search must not cost seconds; a yield can wait for a big step. */
export const STOP_GRACE_MS = 2_000;
export const YIELD_GRACE_MS = 15_000;

/** The thread was ended by this station, for a reason of this station's. */
export class Ended extends Error {
  override readonly name = 'Ended';
}

/** The thread ended by itself: a fault of the engine, or of the machine. */
export class ThreadFault extends Error {
  override readonly name = 'ThreadFault';
}

type AnyJob = Pick<RunningJob<Job>, 'yield' | 'stop' | 'cut' | 'kill'>;

export class HeldParcel {
  /** Somebody else holds the parcel now, or the search has ended: nothing that it does may be written. */
  lost = false;
  /** What part of the interval is done, and how fast: `from` is the part at the first report since `sinceMs`. */
  pace = { sinceMs: performance.now(), from: null as number | null, done: 0 };
  private job: AnyJob | null = null;
  private asked: Advice = 'go on';
  private killed = false;
  private grace: NodeJS.Timeout | null = null;

  constructor(public lease: Lease) {}

  /** Only a parcel of a tree leaves checkpoints and can yield in the middle. */
  get hasCheckpoints(): boolean {
    return this.lease.phase === 'listing' || this.lease.phase === 'checking';
  }

  get canBeCut(): boolean {
    return this.hasCheckpoints && this.job !== null && this.asked === 'go on' && !this.lease.alone;
  }

  /** Runs a job to its end. @throws Ended, ThreadFault */
  async run<J extends Job>(running: RunningJob<J>): Promise<JobEnd<J>> {
    this.job = running;
    if (this.killed) running.kill();
    this.pace = { sinceMs: performance.now(), from: null, done: 0 };
    this.pass();
    try {
      return await running.end;
    } catch (error) {
      if (this.killed) throw new Ended('the thread was ended by the station');
      throw new ThreadFault(error instanceof Error ? error.message : String(error), { cause: error });
    } finally {
      this.job = null;
      if (this.grace !== null) clearTimeout(this.grace);
      this.grace = null;
    }
  }

  /** Passes advice on; the stronger one holds. */
  follow(advice: Advice): void {
    if (advice === 'go on' || this.asked === 'stop' || this.asked === advice) return;
    this.asked = advice;
    this.pass();
  }

  /** The parcel is not ours any more. */
  lose(): void {
    this.lost = true;
    this.follow('stop');
  }

  /** For the end of the process: yields, or is done, or is ended after this long. */
  endWithin(graceMs: number): void {
    this.follow('yield');
    this.killAfter(graceMs);
  }

  /** The thread reported how far it is. */
  note(shareDone: number): void {
    this.pace = { ...this.pace, from: this.pace.from ?? shareDone, done: shareDone };
  }

  cut(): void {
    this.job?.cut();
  }

  kill(): void {
    this.killed = true;
    this.job?.kill();
  }

  private pass(): void {
    if (this.job === null || this.asked === 'go on') return;
    if (this.asked === 'stop') {
      this.job.stop();
      this.killAfter(STOP_GRACE_MS);
    } else if (this.hasCheckpoints) {
      this.job.yield();
      this.killAfter(YIELD_GRACE_MS);
    }
  }

  private killAfter(ms: number): void {
    if (this.grace !== null) clearTimeout(this.grace);
    this.grace = setTimeout(() => this.kill(), ms);
  }
}
