/**
 * A timer that reschedules itself: quick while things change, slower while they stay, backing off while the server is
 * away, silent while nobody looks, and at once when somebody looks again. No framework here, so that it can be tested
 * with a made-up clock.
 */
export interface PollerEnvironment {
  setTimer(run: () => void, ms: number): unknown;
  clearTimer(timer: unknown): void;
  visible(): boolean;
}

/** What one round found: something new, the same as before, a failure, or no reason to go on. */
export type Round = 'changed' | 'same' | 'failed' | 'stop';

export interface PollerOptions {
  /** Milliseconds after a round that found something new. */
  readonly fastest: number;
  /** The longest wait while all is well. */
  readonly slowest: number;
}

const GROWTH = 1.5;
/** While the server is away the wait may grow past `slowest`, up to this. */
const LONGEST_AFTER_FAILURES = 60_000;

export class Poller {
  private timer: unknown = null;
  private wait: number;
  private running: AbortController | null = null;
  private stopped = true;

  constructor(
    private readonly round: (signal: AbortSignal) => Promise<Round>,
    private readonly options: PollerOptions,
    private readonly environment: PollerEnvironment,
  ) {
    this.wait = options.fastest;
  }

  /** Starts, or starts again, with a round at once. A round under way is given up. */
  now(): void {
    this.stopped = false;
    this.running?.abort();
    this.clear();
    this.wait = this.options.fastest;
    void this.run();
  }

  /** Call when the page was hidden or shown. */
  visibilityChanged(): void {
    if (this.stopped) return;
    if (this.environment.visible()) this.now();
    else this.clear();
  }

  stop(): void {
    this.stopped = true;
    this.clear();
    this.running?.abort();
    this.running = null;
  }

  private clear(): void {
    if (this.timer !== null) this.environment.clearTimer(this.timer);
    this.timer = null;
  }

  private async run(): Promise<void> {
    const controller = new AbortController();
    this.running = controller;
    const found = await this.round(controller.signal);
    if (controller.signal.aborted || this.running !== controller) return;
    this.running = null;
    if (found === 'stop') {
      this.stop();
      return;
    }
    this.wait = this.nextWait(found);
    if (!this.stopped && this.environment.visible()) {
      this.timer = this.environment.setTimer(() => void this.run(), this.wait);
    }
  }

  private nextWait(found: Round): number {
    if (found === 'changed') return this.options.fastest;
    if (found === 'failed') return Math.min(this.wait * 2, LONGEST_AFTER_FAILURES);
    return Math.min(this.wait * GROWTH, this.options.slowest);
  }
}
