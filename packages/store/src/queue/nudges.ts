/** Wakes stations: a nudge in the queue for work that must not be forgotten, NOTIFY for promptness, in the same transaction. */
import type { DatabaseOptions, Sql } from '../database.ts';
import { Listener } from './listener.ts';
import type { NudgeQueue } from './nudge-queue.ts';

export class Nudges {
  private readonly callbacks = new Set<() => void>();
  private timer: { readonly at: number; readonly handle: NodeJS.Timeout } | null = null;
  private readonly channel: string;
  private readonly listener: Listener;
  private opening: Promise<void> | null = null;
  private listening: Promise<void> | null = null;

  constructor(
    options: DatabaseOptions,
    private readonly queue: NudgeQueue,
  ) {
    this.channel = `${options.schema}_nudge`;
    this.listener = new Listener(options, this.channel, () => this.callAll());
  }

  /** There is new work: kept until a station takes it. */
  async work(tx: Sql): Promise<void> {
    await this.queue.send(tx);
    await this.notify(tx);
  }

  /** There is old work: a nudge that still waits in the queue is enough. */
  async again(tx: Sql): Promise<void> {
    if ((await this.queue.waiting()) === 0) await this.queue.send(tx);
    await this.notify(tx);
  }

  /** There may be work or advice: heard by whoever listens now. */
  async notify(tx: Sql): Promise<void> {
    await tx.query('select pg_notify($1, $2)', [this.channel, '']);
  }

  /** Calls back when something may have changed. Resolves when it listens. */
  async subscribe(call: () => void): Promise<() => Promise<void>> {
    this.opening ??= this.open();
    try {
      await this.opening;
    } catch (error) {
      this.opening = null;
      throw error;
    }
    this.callbacks.add(call);
    return async () => void this.callbacks.delete(call);
  }

  /** Calls back in this process only: for something that becomes possible after so many milliseconds. */
  later(ms: number): void {
    const at = performance.now() + ms;
    if (this.callbacks.size === 0 || (this.timer !== null && this.timer.at <= at)) return;
    if (this.timer !== null) clearTimeout(this.timer.handle);
    const handle = setTimeout(() => {
      this.timer = null;
      this.callAll();
    }, ms);
    this.timer = { at, handle };
  }

  async close(): Promise<void> {
    if (this.timer !== null) clearTimeout(this.timer.handle);
    this.callbacks.clear();
    await this.listener.close();
    await this.queue.close();
  }

  /** Each half once, also when the other had to be tried again. */
  private async open(): Promise<void> {
    this.listening ??= this.listener.open();
    await this.listening.catch((error: unknown) => {
      this.listening = null;
      throw error;
    });
    await this.queue.take(() => this.callAll());
  }

  private callAll(): void {
    for (const call of this.callbacks) call();
  }
}
