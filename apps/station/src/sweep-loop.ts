/**
 * The sweep: takes back the leases of stations that are silent, re-issues nudges, lets a new day begin. Every station
 * does it; the store lets one at a time. After an outage everybody's heartbeat is old, so a sweep waits until the living
 * have had time to be heard again.
 */
import type { Desk } from './desk.ts';
import { isOutage } from './patience.ts';

export class SweepLoop {
  private timer: NodeJS.Timeout | null = null;
  private running: Promise<void> = Promise.resolve();
  private stopped = false;

  constructor(
    private readonly desk: Desk,
    private readonly onSwept: () => void,
  ) {}

  start(): void {
    this.timer = setTimeout(() => (this.running = this.once()), this.desk.config.sweepSeconds * 1000);
  }

  async stop(): Promise<void> {
    this.stopped = true;
    if (this.timer !== null) clearTimeout(this.timer);
    await this.running;
  }

  private async once(): Promise<void> {
    const { config, work, letters, patience, log } = this.desk;
    const quietMs = patience.lastOutageAt === null ? Infinity : performance.now() - patience.lastOutageAt;
    try {
      if (quietMs > config.leaseSeconds * 1000) {
        const swept = await work.sweep({ leaseSeconds: config.leaseSeconds, letters });
        if (swept.returned > 0) log.warn(swept, 'took back parcels of a station that is silent');
        if (swept.returned + swept.nudged > 0) this.onSwept();
      }
    } catch (error) {
      if (isOutage(error)) patience.noteOutage(error, 'a sweep');
      else log.error({ fault: String(error) }, 'a sweep failed');
    }
    if (!this.stopped) this.start();
  }
}
