/**
 * The whole product on loopback for one test file: its own database schema, local mail, one server, any number of
 * stations, all as real processes from the build. Nothing is shared with another test file but the database cluster.
 */
import { spawn, type ChildProcess } from 'node:child_process';
import { mkdtempSync, readFileSync, readdirSync, existsSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = fileURLToPath(new URL('../..', import.meta.url));

export const ADMIN = { email: 'admin@stack.example', name: 'Ada Keller', password: 'a-long-password' } as const;

export interface StationProcess {
  readonly child: ChildProcess;
  /** Ends it as a power cut would. */
  kill(): Promise<void>;
  /** SIGTERM: it finishes what it holds and says goodbye. */
  stop(): Promise<void>;
}

export interface Stack {
  readonly url: string;
  readonly letters: string;
  readonly databaseUrl: string;
  readonly schema: string;
  readonly serverPid: number;
  /** Lines that the server and the stations wrote, for a failing test. */
  readonly log: readonly string[];
  startStation(name: string, workers: number, env?: Readonly<Record<string, string>>): Promise<StationProcess>;
  mailDown(): Promise<void>;
  mailUp(): Promise<void>;
  stop(): Promise<void>;
}

export async function freePort(): Promise<number> {
  return new Promise((resolve, reject) => {
    const probe = createServer();
    probe.once('error', reject);
    probe.listen(0, '127.0.0.1', () => {
      const { port } = probe.address() as { port: number };
      probe.close(() => resolve(port));
    });
  });
}

/** Polls until `look` answers something; the failure names what was waited for. */
export async function until<T>(
  what: string,
  look: () => Promise<T | null | undefined | false> | T | null | undefined | false,
  seconds = 60,
): Promise<T> {
  const deadline = Date.now() + seconds * 1000;
  let fault: unknown;
  while (Date.now() < deadline) {
    try {
      const seen = await look();
      if (seen) return seen;
    } catch (error) {
      fault = error;
    }
    await new Promise((resolve) => setTimeout(resolve, 50));
  }
  throw new Error(`${what}: not within ${seconds} s`, { cause: fault });
}

function ended(child: ChildProcess): Promise<void> {
  return child.exitCode !== null || child.signalCode !== null
    ? Promise.resolve()
    : new Promise((resolve) => child.once('exit', () => resolve()));
}

export async function startStack(
  database: { readonly databaseUrl: string; readonly schema: string },
  env: Readonly<Record<string, string>> = {},
): Promise<Stack> {
  const folder = mkdtempSync(join(tmpdir(), 'palmette-stack-'));
  const letters = join(folder, 'letters');
  const port = await freePort();
  const mailPort = await freePort();
  const log: string[] = [];
  const children = new Set<ChildProcess>();
  const shared = {
    DATABASE_URL: database.databaseUrl,
    DATABASE_SCHEMA: database.schema,
    HOST: '127.0.0.1',
    PORT: String(port),
    PUBLIC_URL: `http://127.0.0.1:${port}`,
    SMTP_URL: `smtp://127.0.0.1:${mailPort}`,
    SESSION_SECRET: 'a-secret-of-the-tests-that-is-long-enough',
    PASSWORD_KEY: 'another-secret-of-the-tests-long-enough',
    FIRST_ADMIN_EMAIL: ADMIN.email,
    FIRST_ADMIN_NAME: ADMIN.name,
    FIRST_ADMIN_PASSWORD: ADMIN.password,
    LEASE_SECONDS: '3',
    HEARTBEAT_SECONDS: '1',
    SWEEP_SECONDS: '1',
    ...env,
  };
  const run = (name: string, file: string, more: Readonly<Record<string, string>> = {}): ChildProcess => {
    const child = spawn(process.execPath, ['--enable-source-maps', join(root, file)], {
      cwd: folder,
      env: { ...process.env, ...shared, ...more },
    });
    children.add(child);
    for (const stream of [child.stdout, child.stderr])
      stream.on('data', (data: Buffer) => log.push(`${name}: ${data.toString().trimEnd()}`));
    child.once('exit', () => children.delete(child));
    return child;
  };
  const startMail = () =>
    run('mail', 'docker-free-scripts/mail.mjs', { MAIL_PORT: String(mailPort), MAIL_FOLDER: letters });
  let mail = startMail();
  const server = run('server', 'apps/server/dist/main.js');
  const url = shared.PUBLIC_URL;
  const health = () =>
    fetch(`${url}/api/health`).then(
      (r) => r.json() as Promise<{ database: boolean; queue: boolean; stations: number }>,
    );
  try {
    await until('the server is healthy', async () => {
      if (server.exitCode !== null) throw new Error(`the server ended: ${log.join('\n')}`);
      return (await health()).database;
    });
  } catch (error) {
    for (const child of children) child.kill('SIGKILL');
    throw new Error(log.join('\n'), { cause: error });
  }
  return {
    url,
    letters,
    log,
    serverPid: server.pid!,
    databaseUrl: database.databaseUrl,
    schema: database.schema,
    async startStation(name, workers, more = {}) {
      const before = (await health()).stations;
      const child = run(name, 'apps/station/dist/main.js', {
        STATION_NAME: name,
        STATION_WORKERS: String(workers),
        ...more,
      });
      await until(`station ${name} is heard`, async () => (await health()).stations > before);
      return {
        child,
        kill: async () => {
          child.kill('SIGKILL');
          await ended(child);
        },
        stop: async () => {
          child.kill('SIGTERM');
          await ended(child);
        },
      };
    },
    async mailDown() {
      mail.kill('SIGTERM');
      await ended(mail);
    },
    async mailUp() {
      mail = startMail();
    },
    async stop() {
      const all = [...children];
      for (const child of all) child.kill('SIGTERM');
      await Promise.all(
        all.map(async (child) => {
          const late = setTimeout(() => child.kill('SIGKILL'), 20_000);
          await ended(child);
          clearTimeout(late);
        }),
      );
    },
  };
}

/** Letters kept by the local mail server, decoded as far as the tests need. */
export function lettersIn(folder: string): { readonly file: string; readonly text: string }[] {
  if (!existsSync(folder)) return [];
  return readdirSync(folder)
    .filter((f) => f.endsWith('.eml'))
    .sort()
    .map((file) => ({
      file,
      text: readFileSync(join(folder, file), 'utf8').replaceAll('=\r\n', '').replaceAll('=3D', '='),
    }));
}
