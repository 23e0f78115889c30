/**
 * CPU time of the calling thread. `process.cpuUsage()` answers for the whole process, so Linux's own account of the
 * thread is read; elsewhere the wall time since the start stands in, and `approximate` says so.
 */
import { readFileSync } from 'node:fs';

const SCHEDSTAT = '/proc/thread-self/schedstat';

function readSchedstatMs(): number | null {
  try {
    return Number(readFileSync(SCHEDSTAT, 'latin1').split(' ', 1)[0]) / 1e6;
  } catch {
    return null; // no such file outside Linux: the caller falls back to wall time
  }
}

export class CpuMeter {
  readonly approximate: boolean;
  private readonly start: number;

  constructor() {
    const now = readSchedstatMs();
    this.approximate = now === null;
    this.start = now ?? performance.now();
  }

  /** Milliseconds of CPU since the meter was made. */
  get ms(): number {
    return (this.approximate ? performance.now() : (readSchedstatMs() ?? this.start)) - this.start;
  }
}
