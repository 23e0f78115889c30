/** The thread file that piscina loads: one job at a time, talking over its own port. No database here. */
import type { MessagePort } from 'node:worker_threads';
import type { Job, JobEnd } from './jobs.ts';
import { runJob } from './run-job.ts';

export interface ThreadTask {
  readonly job: Job;
  readonly words: SharedArrayBuffer;
  readonly port: MessagePort;
}

export default function runTask(task: ThreadTask): JobEnd<Job> {
  try {
    return runJob(task.job, { words: new Int32Array(task.words), say: (message) => task.port.postMessage(message) });
  } finally {
    task.port.postMessage(null);
  }
}
