/** The process's side of a job that reads or writes a long list: serves its pieces and keeps its chunks, one at a time. */
import type { Job, JobMessage, KeepMessage, NeedMessage } from './jobs.ts';
import type { RunningJob, Threads } from './pool.ts';

/** Where the pieces of a job lie. What a job does not ask for need not be there. */
export interface Shelf {
  /** The next piece of what the last stage found, or null; `no` counts up from 0, and 0 begins anew. */
  readonly found?: (no: number) => Promise<Uint8Array | null>;
  /** The same of the certificate that is being checked. */
  readonly certificate?: (no: number) => Promise<Uint8Array | null>;
  /** Keeps a chunk of the certificate that is being written. */
  readonly keep?: (chunk: Uint8Array) => Promise<void>;
}

/** Runs a job; a fault of the shelf ends the job and is what its end rejects with. */
export function runServed<J extends Job>(
  threads: Pick<Threads, 'run'>,
  job: J,
  shelf: Shelf,
  onMessage: (message: Exclude<JobMessage, NeedMessage | KeepMessage>) => void = () => {},
): RunningJob<J> {
  let fault: { readonly of: unknown } | null = null;
  const running = threads.run(job, (message) => {
    if (message.kind !== 'need' && message.kind !== 'keep') return onMessage(message);
    served(shelf, message).then(running.reply, (error: unknown) => {
      fault = { of: error };
      running.kill();
    });
  });
  return {
    ...running,
    end: running.end.catch((error: unknown) => {
      throw fault === null ? error : fault.of;
    }),
  };
}

async function served(shelf: Shelf, message: NeedMessage | KeepMessage): Promise<Uint8Array | null> {
  if (message.kind === 'need') return shelf[message.of]!(message.no);
  await shelf.keep!(message.chunk);
  return null;
}
