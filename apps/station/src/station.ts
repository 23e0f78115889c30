/**
 * A station: lends its workers to the pool. Woken by nudges, it claims parcels in fair turn and runs each on a thread;
 * the main thread says that it is alive, passes advice on, and cuts long parcels when a worker is idle. Several stations
 * on one database need nothing else.
 */
import { randomUUID } from 'node:crypto';
import type { Advice, Lease } from '@palmette/store';
import { Bell } from './bell.ts';
import { longest } from './cut.ts';
import type { Desk } from './desk.ts';
import { Heartbeat } from './heartbeat.ts';
import { HeldParcel } from './held-parcel.ts';
import { isOutage } from './patience.ts';
import { replaySpool } from './replay-spool.ts';
import { runParcel } from './run-parcel.ts';
import { SweepLoop } from './sweep-loop.ts';

/** While the database is away the claim is tried again after this long. */
const OUTAGE_PAUSE_MS = 1_000;
/** A search whose cut nobody took is not cut again for this long: its owner may be at the cap. */
const CUT_PAUSE_MS = 10_000;
/** At the end of the process: for a job that cannot yield, and then for all that is still to be written. */
const FINISH_GRACE_MS = 4_000;
const WRITE_GRACE_MS = 8_000;

export class Station {
  readonly id = randomUUID();
  private readonly held = new Map<HeldParcel, Promise<void>>();
  private readonly bell = new Bell();
  private readonly heartbeat: Heartbeat;
  private readonly sweeps: SweepLoop;
  private readonly notCutBefore = new Map<string, number>();
  private standBy = false;
  private stopping = false;
  private elsewhereIdle = false;
  private loop: Promise<void> = Promise.resolve();
  private stopListening: () => Promise<void> = async () => {};

  constructor(private readonly desk: Desk) {
    this.heartbeat = new Heartbeat(desk, () => this.beat());
    this.sweeps = new SweepLoop(desk, () => this.bell.ring());
  }

  async start(): Promise<void> {
    const { config, work, patience, log } = this.desk;
    await patience.untilAnswered('the registration', () => this.register());
    this.stopListening = await patience.untilAnswered('the nudges', () =>
      work.onNudge(() => {
        this.heartbeat.soon();
        this.bell.ring();
      }),
    );
    await replaySpool(this.desk);
    this.heartbeat.start();
    this.sweeps.start();
    this.loop = this.claimLoop();
    log.info({ station: this.id, name: config.name, workers: config.workers }, 'taking work');
  }

  /** Finish and stand by: yields what runs, writes it, gives it back, says goodbye. */
  async stop(): Promise<void> {
    this.stopping = true;
    this.bell.ring();
    const patienceEnds = setTimeout(() => this.desk.patience.giveUp(), FINISH_GRACE_MS + WRITE_GRACE_MS);
    await this.loop;
    for (const held of this.held.keys()) held.endWithin(FINISH_GRACE_MS);
    await Promise.all(this.held.values());
    await this.sweeps.stop();
    await this.heartbeat.stop();
    await this.stopListening().catch((error: unknown) => this.desk.log.warn({ fault: String(error) }, 'not listening'));
    await this.desk.patience
      .untilAnswered('the goodbye', () => this.desk.work.stationStopped(this.id))
      .catch((error: unknown) => this.desk.log.warn({ fault: String(error) }, 'left without a goodbye'));
    clearTimeout(patienceEnds);
    this.desk.log.info({ station: this.id }, 'stopped');
  }

  private register(): Promise<void> {
    const { name, workers } = this.desk.config;
    return this.desk.work.registerStation({ id: this.id, name, version: VERSION, workers });
  }

  private async claimLoop(): Promise<void> {
    let pauseMs = 0;
    while (!this.stopping) {
      if (pauseMs > 0) await this.bell.heard(pauseMs);
      if (this.stopping) return;
      pauseMs = this.desk.config.sweepSeconds * 1000;
      if (this.standBy) continue;
      try {
        const lease = await this.claim();
        if (lease !== null) {
          this.take(lease);
          pauseMs = 0;
        } else {
          this.cutIfIdle();
        }
      } catch (error) {
        if (!isOutage(error)) this.desk.log.error({ fault: String(error) }, 'a claim failed');
        else this.desk.patience.noteOutage(error, 'a claim');
        pauseMs = OUTAGE_PAUSE_MS;
      }
    }
  }

  /** Asked with no worker free, too: then the store may ask a running parcel to yield for a short question. */
  private async claim(): Promise<Lease | null> {
    const { work, engine } = this.desk;
    return work.claim(this.id, {
      freeWorkers: this.desk.config.workers - this.held.size,
      revisions: engine.revisions,
      canRunAlone: this.held.size === 0,
    });
  }

  private take(lease: Lease): void {
    const held = new HeldParcel(lease);
    this.notCutBefore.delete(lease.searchId);
    if (lease.alone) this.desk.log.warn({ parcel: lease.parcelId }, 'runs alone after a crash');
    const run = runParcel(held, this.desk).finally(() => {
      this.held.delete(held);
      this.bell.ring();
    });
    this.held.set(held, run);
  }

  private async beat(): Promise<void> {
    const leases = [...this.held.keys()].map(({ lease: { parcelId, attempt } }) => ({ parcelId, attempt }));
    const report = { busy: this.held.size, memoryBytes: process.memoryUsage().rss, leases };
    const { standBy, advice } = await this.desk.work.heartbeat(this.id, report);
    // also said to a station that was silent so long that it was forgotten: such a one comes back like this
    if (standBy && !this.standBy) await this.register();
    this.follow(standBy, advice);
    if (this.held.size === this.desk.config.workers) await this.lookElsewhere();
    this.cutIfIdle();
  }

  private follow(standBy: boolean, advice: ReadonlyMap<string, Advice>): void {
    if (standBy !== this.standBy) {
      this.standBy = standBy;
      this.desk.log.info({}, standBy ? 'finishing, then standing by' : 'taking work again');
      this.bell.ring();
    }
    for (const held of this.held.keys()) held.follow(standBy ? 'yield' : (advice.get(held.lease.parcelId) ?? 'go on'));
  }

  private async lookElsewhere(): Promise<void> {
    const stations = await this.desk.pool.stations();
    this.elsewhereIdle = stations.some((s) => s.id !== this.id && s.state === 'working' && s.busy < s.workers);
  }

  /** An idle worker and a long parcel: the parcel is cut, and the nudge of the new piece finds the worker. */
  private cutIfIdle(): void {
    const idle = this.held.size < this.desk.config.workers || this.elsewhereIdle;
    if (!idle || this.standBy || this.stopping) return;
    const now = performance.now();
    const cuttable = [...this.held.keys()].filter((h) => (this.notCutBefore.get(h.lease.searchId) ?? 0) <= now);
    const held = longest(cuttable, now);
    if (held === null) return;
    this.notCutBefore.set(held.lease.searchId, now + CUT_PAUSE_MS);
    held.cut();
  }
}

const VERSION = '0.1.0';
