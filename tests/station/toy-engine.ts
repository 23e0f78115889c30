/** Runs the toy's jobs on worker threads, with the interface that the real engine has. */
import { fileURLToPath } from 'node:url';
import { MessageChannel, Worker } from 'node:worker_threads';
import type { Engine } from '@palmette/station';
import { reply, WORDS, type Job, type JobEnd, type JobMessage } from '@palmette/threads';

const FILE = fileURLToPath(new URL('./toy-worker.mjs', import.meta.url));

export function openToyEngine(size: number): Engine {
  const idle: Worker[] = [];
  const all = new Set<Worker>();
  const begin = () => {
    const worker = new Worker(FILE, { execArgv: ['--conditions=source'] });
    all.add(worker);
    worker.once('exit', () => all.delete(worker));
    return worker;
  };
  return {
    size,
    revisions: [1],
    run<J extends Job>(job: J, onMessage: (message: JobMessage) => void = () => {}) {
      const worker = idle.pop() ?? begin();
      const words = new Int32Array(new SharedArrayBuffer(4 * WORDS));
      const { port1, port2 } = new MessageChannel();
      const end = new Promise<JobEnd<J>>((resolve, reject) => {
        const exit = (code: number) => reject(new Error(`the thread ended with code ${code}`));
        const fault = (error: Error) => reject(error);
        port1.on('message', (message: JobMessage | { kind: 'end'; end: JobEnd<J> }) => {
          if (message.kind === 'end') resolve(message.end);
          else onMessage(message);
        });
        worker.once('exit', exit);
        worker.once('error', fault);
        worker.once('message', () => {
          worker.off('exit', exit);
          worker.off('error', fault);
          idle.push(worker);
        });
      });
      worker.postMessage({ job, words: words.buffer, port: port2 }, [port2]);
      return {
        end,
        yield: () => void Atomics.compareExchange(words, 0, 0, 1),
        stop: () => void Atomics.store(words, 0, 2),
        cut: () => void Atomics.compareExchange(words, 0, 0, 3),
        answerCut: (recorded: boolean) => {
          Atomics.store(words, 1, recorded ? 1 : 2);
          Atomics.notify(words, 1);
        },
        reply: (piece: Uint8Array | null) => reply(port1, words, piece),
        kill: () => void worker.terminate(),
      };
    },
    async close() {
      await Promise.all([...all].map((worker) => worker.terminate()));
    },
  };
}
