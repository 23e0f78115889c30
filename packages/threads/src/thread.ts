/** The thread file that piscina loads: one job at a time, talking over its own port. No database here. */
import type { MessagePort } from 'node:worker_threads';
import { askOver } from './asking.ts';
import type { Job, JobEnd } from './jobs.ts';
import { runJob } from './run-job.ts';

export interface ThreadTask {
  readonly job: Job;
  readonly words: SharedArrayBuffer;
  readonly port: MessagePort;
}

export default function runTask(task: ThreadTask): JobEnd<Job> {
  const words = new Int32Array(task.words);
  try {
    return runJob(task.job, {
      words,
      say: (message) => task.port.postMessage(message),
      ask: askOver(task.port, words),
    });
  } finally {
    task.port.postMessage(null);
  }
}
