/** One piscina pool for the life of a process. A job is commanded through shared words; killing it ends its thread. */
import { existsSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { MessageChannel } from 'node:worker_threads';
import { Piscina } from 'piscina';
import { reply } from './asking.ts';
import { COMMAND, CUT_ANSWER, WORDS, type Job, type JobEnd, type JobMessage } from './jobs.ts';

export interface RunningJob<J extends Job> {
  /** Settles when the thread is done; rejects with `AbortError` after `kill`, or with the thread's fault. */
  readonly end: Promise<JobEnd<J>>;
  yield(): void;
  stop(): void;
  /** Asks for a cut; the proposal arrives as a message `cut` and waits for `answerCut`. */
  cut(): void;
  answerCut(recorded: boolean): void;
  /** The reply to `need` (null after the last piece) or to `keep` (null). */
  reply(piece: Uint8Array | null): void;
  /** Ends the thread, even in a tight loop. What it did since its last checkpoint is lost. */
  kill(): void;
}

export interface Threads {
  readonly size: number;
  run<J extends Job>(job: J, onMessage?: (message: JobMessage) => void): RunningJob<J>;
  close(): Promise<void>;
}

/** The bundled thread file beside this module, or the source in development. */
function threadFile(): { filename: string; execArgv: string[] } {
  const bundled = fileURLToPath(new URL('./thread.js', import.meta.url));
  if (existsSync(bundled)) return { filename: bundled, execArgv: [] };
  return {
    filename: fileURLToPath(new URL('./thread.ts', import.meta.url)),
    execArgv: ['--conditions=source', '--import', 'tsx'],
  };
}

export function openThreads(options: { readonly threads: number }): Threads {
  const { filename, execArgv } = threadFile();
  const pool = new Piscina({ filename, execArgv, minThreads: 0, maxThreads: options.threads, idleTimeout: 60_000 });
  return {
    size: options.threads,
    run<J extends Job>(job: J, onMessage: (message: JobMessage) => void = () => {}): RunningJob<J> {
      const words = new Int32Array(new SharedArrayBuffer(4 * WORDS));
      const { port1, port2 } = new MessageChannel();
      const abort = new AbortController();
      // the thread's last word is null: then every message before it has been delivered
      const allSaid = new Promise<void>((resolve) =>
        port1.on('message', (message: JobMessage | null) => (message === null ? resolve() : onMessage(message))),
      );
      const end = pool.run(
        { job, words: words.buffer, port: port2 },
        { transferList: [port2], signal: abort.signal },
      ) as Promise<JobEnd<J>>;
      return {
        end: end.then((answer) => allSaid.then(() => answer)).finally(() => port1.close()),
        yield: () => void Atomics.compareExchange(words, 0, COMMAND.goOn, COMMAND.yield),
        stop: () => void Atomics.store(words, 0, COMMAND.stop),
        cut: () => void Atomics.compareExchange(words, 0, COMMAND.goOn, COMMAND.cut),
        answerCut: (recorded) => {
          Atomics.store(words, 1, recorded ? CUT_ANSWER.recorded : CUT_ANSWER.refused);
          Atomics.notify(words, 1);
        },
        reply: (piece) => reply(port1, words, piece),
        kill: () => abort.abort(),
      };
    },
    close: () => pool.destroy(),
  };
}
