/** The project's own local mail server as a process, and the letters in its folder. */
import { spawn, type ChildProcess } from 'node:child_process';
import { existsSync, readFileSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { simpleParser, type ParsedMail } from 'mailparser';
import { until } from '../stack/stack.ts';

const root = fileURLToPath(new URL('../..', import.meta.url));

export interface LocalMail {
  readonly port: number;
  readonly folder: string;
  stop(): Promise<void>;
}

/** @param port 0 for a free one */
export async function startLocalMail(folder: string, port = 0): Promise<LocalMail> {
  const child: ChildProcess = spawn(process.execPath, ['docker-free-scripts/mail.mjs'], {
    cwd: root,
    stdio: ['ignore', 'pipe', 'pipe'],
    env: { ...process.env, MAIL_PORT: String(port), MAIL_FOLDER: folder },
  });
  let said = '';
  for (const stream of [child.stdout!, child.stderr!]) stream.on('data', (data: Buffer) => (said += data.toString()));
  const end = new Promise<void>((resolve) => child.once('exit', () => resolve()));
  const at = await until('the mail server says where it is', () => {
    if (child.exitCode !== null) throw new Error(said);
    return /smtp:\/\/127\.0\.0\.1:(\d+)/.exec(said);
  });
  return {
    port: Number(at[1]),
    folder,
    async stop() {
      child.kill('SIGTERM');
      await end;
    },
  };
}

/** Letters in the order of their arrival. */
export async function keptLetters(folder: string): Promise<ParsedMail[]> {
  if (!existsSync(folder)) return [];
  const files = readdirSync(folder).filter((file) => file.endsWith('.eml'));
  return Promise.all(files.sort().map((file) => simpleParser(readFileSync(join(folder, file)))));
}
