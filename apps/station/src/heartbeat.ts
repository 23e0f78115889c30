/** Says that the station and its leases are alive: on a clock, and at once when a nudge says that there is advice. */
import type { Desk } from './desk.ts';
import { isOutage } from './patience.ts';

/** Nudges can come in bursts. */
const SHORTEST_MS = 100;

export class Heartbeat {
  private timer: NodeJS.Timeout | null = null;
  private beating: Promise<void> = Promise.resolve();
  private inFlight = false;
  private again = false;
  private lastMs = 0;
  private stopped = false;

  constructor(
    private readonly desk: Desk,
    private readonly beat: () => Promise<void>,
  ) {}

  start(): void {
    this.soon();
  }

  soon(): void {
    if (this.stopped) return;
    if (this.inFlight) {
      this.again = true;
      return;
    }
    this.at(Math.max(0, this.lastMs + SHORTEST_MS - performance.now()));
  }

  async stop(): Promise<void> {
    this.stopped = true;
    if (this.timer !== null) clearTimeout(this.timer);
    await this.beating;
  }

  private at(ms: number): void {
    if (this.timer !== null) clearTimeout(this.timer);
    this.timer = setTimeout(() => (this.beating = this.beatNow()), ms);
  }

  private async beatNow(): Promise<void> {
    this.inFlight = true;
    this.lastMs = performance.now();
    try {
      await this.beat();
    } catch (error) {
      if (isOutage(error)) this.desk.patience.noteOutage(error, 'a heartbeat');
      else this.desk.log.error({ fault: String(error) }, 'a heartbeat failed');
    }
    this.inFlight = false;
    if (this.stopped) return;
    if (this.again) {
      this.again = false;
      this.at(SHORTEST_MS);
    } else {
      this.at(this.desk.config.heartbeatSeconds * 1000);
    }
  }
}
