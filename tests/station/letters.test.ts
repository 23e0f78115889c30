/** Letters from the database over real SMTP on loopback: sent once, after an outage too; refused ones are given up. */
import { join } from 'node:path';
import { SMTPServer, type SMTPServerOptions } from 'smtp-server';
import { simpleParser } from 'mailparser';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { freePort } from '../stack/stack.ts';
import { testDatabase, type TestDatabase } from '../store/test-database.ts';
import { keptLetters, startLocalMail, type LocalMail } from './local-mail.ts';
import { startPool, until, type PoolUnderTest, type ToyStation } from './pool-under-test.ts';

let database: TestDatabase;
let pool: PoolUnderTest;
let ada: Awaited<ReturnType<PoolUnderTest['person']>>;
let mailPort: number;
const running: ToyStation[] = [];
const servers: (LocalMail | { stop(): Promise<void> })[] = [];

beforeAll(async () => {
  database = await testDatabase();
  pool = await startPool(database);
  ada = await pool.person('ada');
  mailPort = await freePort();
});
afterEach(async () => {
  for (const station of running.splice(0)) {
    station.signal('SIGTERM');
    await station.gone();
  }
  for (const server of servers.splice(0)) await server.stop();
});
afterAll(async () => {
  await pool?.close();
  await database?.drop();
});

async function station(name: string): Promise<ToyStation> {
  const started = await pool.station(name, 1, { SMTP_URL: `smtp://127.0.0.1:${mailPort}` });
  running.push(started);
  return started;
}

async function mail(folder: string): Promise<LocalMail> {
  const started = await startLocalMail(join(pool.folder, folder), mailPort);
  servers.push(started);
  return started;
}

/** An SMTP server in this process, for what an obliging one never does. */
async function strangeMail(options: SMTPServerOptions): Promise<void> {
  const server = new SMTPServer({ authOptional: true, disabledCommands: ['STARTTLS'], ...options });
  server.on('error', () => {}); // a client that is killed in the middle
  await new Promise<void>((resolve) => void server.listen(mailPort, '127.0.0.1', () => resolve()));
  servers.push({ stop: () => new Promise((resolve) => server.close(() => resolve())) });
}

interface LetterOf {
  readonly state: string;
  readonly attempt: number;
  readonly fault: string | null;
  readonly message_id: string;
}
async function letterOf(questionId: string): Promise<LetterOf> {
  const [letter] = await pool.sql<LetterOf>(
    `select l.state, l.attempt, l.fault, l.message_id from letter l join search s on s.id = l.search_id where s.question_id = $1`,
    [questionId],
  );
  if (letter === undefined) throw new Error(`no letter about ${questionId}`);
  return letter;
}
const isIn = (questionId: string, state: string) => async () => {
  const letter = await letterOf(questionId);
  return letter.state === state && letter;
};
/** The wait before the next attempt is the store's affair; here it is over. */
const tryNow = () => pool.sql(`update letter set not_before = now() where state = 'waiting'`);

describe('a letter', () => {
  it('about a settled search says verdict, ground, time and link, and arrives once', async () => {
    const { folder } = await mail('plain');
    await station('writer');
    const { id } = await pool.ask(ada, 2_000, 'quick');
    await until('it is sent', isIn(id, 'sent'));
    const letters = await keptLetters(folder);
    expect(letters).toHaveLength(1);
    const [letter] = letters;
    expect(letter!.subject).toBe('Embeds in Z^3: 2000/1');
    expect(letter!.messageId).toBe((await letterOf(id)).message_id);
    expect(letter!.text).toContain('Ground: exhaustion; checked.');
    expect(letter!.text).toContain(`https://pool.example/questions/${id}`);
  });

  it('about a spent search says first that it is not a no', async () => {
    const { folder } = await mail('spent');
    await station('writer');
    const { id } = await pool.ask(ada, 60_000, 'spin 150', 100);
    await until('it is sent', isIn(id, 'sent'));
    const [letter] = await keptLetters(folder);
    expect(letter!.subject).toBe('Open, budget used up: 60000/1');
    expect(letter!.text!.startsWith('This is not a no.')).toBe(true);
  });

  it('waits while the mail server is away, and is then sent once', async () => {
    await station('writer');
    const { id } = await pool.ask(ada, 2_000, 'quick');
    await until('it was tried', async () => {
      const letter = await letterOf(id);
      return letter.attempt > 0 && letter.state === 'waiting';
    });
    expect((await letterOf(id)).fault).toContain('ECONNREFUSED');
    const { folder } = await mail('late');
    await tryNow();
    await until('it is sent', isIn(id, 'sent'));
    expect(await keptLetters(folder)).toHaveLength(1);
  });

  it('is given up after a permanent refusal, and only then', async () => {
    let answers = 0;
    await strangeMail({
      onRcptTo(_address, _session, answer) {
        answers += 1;
        const code = answers === 1 ? 451 : 550;
        answer(Object.assign(new Error(answers === 1 ? 'not now' : 'nobody of that name'), { responseCode: code }));
      },
    });
    await station('writer');
    const { id } = await pool.ask(ada, 2_000, 'quick');
    await until('it was put off', async () => answers === 1 && (await isIn(id, 'waiting')()));
    await tryNow();
    const letter = await until('it is given up', isIn(id, 'failed'));
    expect(letter.fault).toContain('nobody of that name');
    expect(answers).toBe(2);
  });

  it('goes out again with the same Message-ID when a station dies between sending and saying so', async () => {
    const received: string[] = [];
    let onReceived = async (): Promise<void> => {};
    await strangeMail({
      onData(stream, _session, answer) {
        void simpleParser(stream).then(async ({ messageId }) => {
          received.push(messageId!);
          await onReceived();
          answer();
        });
      },
    });
    const first = await station('dies');
    onReceived = async () => {
      first.signal('SIGKILL');
      await first.gone();
    };
    const { id } = await pool.ask(ada, 2_000, 'quick');
    await first.gone();
    await until('the letter is in the middle', isIn(id, 'sending'));
    onReceived = async () => {};
    await station('heir');
    await pool.sql(`update letter set claimed_at = claimed_at - interval '3 minutes' where state = 'sending'`);
    await until('it is sent', isIn(id, 'sent'));
    expect(received).toHaveLength(2);
    expect(received[1]).toBe(received[0]);
  });
});
