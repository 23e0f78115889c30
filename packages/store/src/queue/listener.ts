/**
 * LISTEN on one channel. After a lost connection it connects again by itself and calls back once, since nobody knows
 * what was said meanwhile.
 */
import { Client } from 'pg';
import { connectionOptions, type DatabaseOptions } from '../database.ts';

const FIRST_WAIT_MS = 100;
const LONGEST_WAIT_MS = 5_000;

export class Listener {
  private client: Client | null = null;
  private closed = false;
  private timer: NodeJS.Timeout | null = null;

  constructor(
    private readonly options: DatabaseOptions,
    private readonly channel: string,
    private readonly call: () => void,
  ) {}

  async open(): Promise<void> {
    const client = new Client(connectionOptions(this.options));
    let lost = false;
    const lose = (error?: unknown) => {
      if (lost) return;
      lost = true;
      if (this.client !== client) return; // it never came up: `open` throws
      this.client = null;
      if (this.closed) return;
      if (error !== undefined) this.options.onError(error);
      this.again(FIRST_WAIT_MS);
    };
    client.on('error', lose);
    client.on('end', () => lose());
    client.on('notification', this.call);
    try {
      await client.connect();
      await client.query(`listen "${this.channel}"`);
    } catch (error) {
      await client.end().catch(() => undefined);
      throw error;
    }
    if (this.closed) return void (await client.end());
    this.client = client;
    if (lost) this.again(FIRST_WAIT_MS);
  }

  async close(): Promise<void> {
    this.closed = true;
    if (this.timer !== null) clearTimeout(this.timer);
    const { client } = this;
    this.client = null;
    await client?.end();
  }

  private again(waitMs: number): void {
    if (this.closed) return;
    this.timer = setTimeout(() => {
      this.open().then(
        () => this.call(),
        () => this.again(Math.min(waitMs * 2, LONGEST_WAIT_MS)),
      );
    }, waitMs);
  }
}
