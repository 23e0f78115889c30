/**
 * The database can be away for a while: restarted, failed over, unplugged. What has to be written is tried again with
 * growing waits; what the database refuses for a reason of its own is not.
 */
import type { Log } from './log.ts';

const FIRST_WAIT_MS = 100;
const LONGEST_WAIT_MS = 5_000;

/** SQLSTATE classes and codes that mean "not now": connection, shutdown, start-up, too many, deadlock, frozen too long. */
const SQLSTATES_OF_AN_OUTAGE = /^(08...|57P0[1-5]|53...|40001|40P01|25P03)$/;
const SOCKET_CODES = new Set(['ECONNREFUSED', 'ECONNRESET', 'EPIPE', 'ETIMEDOUT', 'ENOTFOUND', 'EAI_AGAIN']);
/** The driver and its pool say these without a code; a runner is released early when its connection was lost. */
const DRIVER_WORDS =
  /connection terminated|query runner already released|client has encountered a connection error|timeout exceeded when trying to connect|client was closed|not queryable|connection is not established/i;

/** Whether an error only says that the database cannot be reached now. */
export function isOutage(error: unknown): boolean {
  for (let at = error, depth = 0; at instanceof Object && depth < 8; depth += 1) {
    const { code, syscall, message, driverError, cause, errors } = at as Record<string, unknown>;
    if (typeof code === 'string' && (SQLSTATES_OF_AN_OUTAGE.test(code) || SOCKET_CODES.has(code))) return true;
    if (code === 'ENOENT' && syscall === 'connect') return true; // a socket file that is not there yet
    if (typeof message === 'string' && DRIVER_WORDS.test(message)) return true;
    if (Array.isArray(errors) && errors.some(isOutage)) return true;
    at = driverError instanceof Object && driverError !== at ? driverError : cause;
  }
  return false;
}

export class Patience {
  /** When the database was last out of reach, in milliseconds of this process's clock; null if never. */
  lastOutageAt: number | null = null;
  private givenUp = false;
  private readonly waiting = new Set<() => void>();

  /** @param firstWaitMs the first of the growing waits */
  constructor(
    private readonly log: Log,
    private readonly firstWaitMs = FIRST_WAIT_MS,
  ) {}

  /** No more waits: the process is about to end, and what is not written now stays in the spool. */
  giveUp(): void {
    this.givenUp = true;
    for (const wake of this.waiting) wake();
  }

  noteOutage(error: unknown, what: string): void {
    this.lastOutageAt = performance.now();
    this.log.warn({ what, fault: String(error) }, 'the database is away');
  }

  /**
   * Repeats a call until the database answers.
   * @throws what the call throws when it is not an outage, or the outage itself after `giveUp`
   */
  async untilAnswered<T>(what: string, call: () => Promise<T>): Promise<T> {
    for (let wait = this.firstWaitMs; ; wait = Math.min(wait * 2, LONGEST_WAIT_MS)) {
      try {
        return await call();
      } catch (error) {
        if (!isOutage(error)) throw error;
        this.noteOutage(error, what);
        if (this.givenUp) throw error;
        await this.pause(wait);
      }
    }
  }

  private async pause(ms: number): Promise<void> {
    let wake = () => {};
    await new Promise<void>((resolve) => {
      const timer = setTimeout(resolve, ms);
      wake = () => {
        clearTimeout(timer);
        resolve();
      };
      this.waiting.add(wake);
    });
    this.waiting.delete(wake);
  }
}
