/**
 * Sends the letters that wait in the database. A letter is claimed first, so two stations never send the same one; if a
 * process dies between sending and saying so, the letter goes out again with the same Message-ID.
 */
import { createTransport, type Transporter } from 'nodemailer';
import type { LetterStore } from '@palmette/store';
import { Bell } from './bell.ts';
import type { Log } from './log.ts';
import { isOutage, type Patience } from './patience.ts';

/** Shorter in sum than the two minutes after which a letter in the middle of being sent is due again. */
const CONNECT_MS = 10_000;
const SOCKET_MS = 60_000;

export interface LetterSettings {
  readonly smtpUrl: string;
  readonly from: string;
  /** Letters whose time to be tried again has come are looked for this often. */
  readonly lookEveryMs: number;
}

type Letter = NonNullable<Awaited<ReturnType<LetterStore['claim']>>>;

export class LetterSender {
  private readonly bell = new Bell();
  private readonly transport: Transporter;
  private stopping = false;
  private loop: Promise<void> = Promise.resolve();

  constructor(
    private readonly letters: LetterStore,
    private readonly settings: LetterSettings,
    private readonly patience: Patience,
    private readonly log: Log,
  ) {
    this.transport = createTransport({
      url: settings.smtpUrl,
      connectionTimeout: CONNECT_MS,
      greetingTimeout: CONNECT_MS,
      socketTimeout: SOCKET_MS,
      // a local server has no certificate that anybody could check
      ...(isLoopback(settings.smtpUrl) ? { ignoreTLS: true } : {}),
    });
  }

  start(): void {
    this.loop = this.sendAll();
  }

  /** There may be a new letter. */
  soon(): void {
    this.bell.ring();
  }

  /** A letter on its way is finished first. */
  async stop(): Promise<void> {
    this.stopping = true;
    this.bell.ring();
    await this.loop;
    this.transport.close();
  }

  private async sendAll(): Promise<void> {
    while (!this.stopping) {
      try {
        const letter = await this.letters.claim();
        if (letter === null) await this.bell.heard(this.settings.lookEveryMs);
        else await this.send(letter);
      } catch (error) {
        if (isOutage(error)) this.patience.noteOutage(error, 'letters');
        else this.log.error({ fault: String(error) }, 'letters cannot be looked for');
        await this.bell.heard(this.settings.lookEveryMs);
      }
    }
  }

  private async send(letter: Letter): Promise<void> {
    const { id, attempt } = letter;
    try {
      await this.transport.sendMail({
        from: this.settings.from,
        to: letter.recipient,
        subject: letter.subject,
        text: letter.body,
        messageId: letter.messageId,
        headers: { 'Auto-Submitted': 'auto-generated' },
      });
    } catch (error) {
      const permanent = isPermanent(error);
      this.log.warn({ letter: id, attempt, permanent, fault: String(error) }, 'a letter was not taken');
      await this.patience.untilAnswered('a letter that was not taken', () =>
        this.letters.failed(id, attempt, error instanceof Error ? error.message : String(error), permanent),
      );
      return;
    }
    await this.patience.untilAnswered('a letter that was sent', () => this.letters.sent(id, attempt));
    this.log.info({ letter: id, attempt }, 'a letter was sent');
  }
}

function isLoopback(url: string): boolean {
  return ['127.0.0.1', 'localhost', '[::1]'].includes(new URL(url).hostname);
}

/**
 * A refusal of this letter for good (RFC 5321, 4.2.1: 5yz), said about its sender, recipient or content. A refused
 * sign-in is a matter of settings and can be mended, so the letter waits.
 */
export function isPermanent(error: unknown): boolean {
  const { responseCode, command } = error as { responseCode?: number; command?: string };
  const aboutLetter = command !== undefined && /^(MAIL FROM|RCPT TO|DATA|API)$/.test(command);
  return aboutLetter && responseCode !== undefined && responseCode >= 500 && responseCode < 600;
}
