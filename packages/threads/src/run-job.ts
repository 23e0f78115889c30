/** What a thread does with each kind of job. */
import { openRun, readPlan, type Run } from '@palmette/search';
import { answerAlone } from './answer-alone.ts';
import type { Ask } from './asking.ts';
import { assemble } from './assemble-job.ts';
import { checkParcel, conclude, open } from './check-job.ts';
import { choose } from './choose.ts';
import { FoundPacker } from './found-chunks.ts';
import type { Job, JobEnd, ListEnd, ListJob } from './jobs.ts';
import { paceRun, type Talk } from './paced-run.ts';

export interface ThreadTalk extends Talk {
  /** Says what is needed and sleeps until it is there. */
  readonly ask: Ask;
}

export function runJob<J extends Job>(job: J, talk: ThreadTalk): JobEnd<J> {
  return run(job, talk) as JobEnd<J>;
}

function run(job: Job, { ask, ...talk }: ThreadTalk): JobEnd<Job> {
  switch (job.kind) {
    case 'choose':
      return choose(job.document, job.quickCpuMs);
    case 'list':
      return list(job, talk);
    case 'assemble':
      return assemble(job, ask);
    case 'open':
      return open(job, ask);
    case 'check':
      return checkParcel(job, talk, ask);
    case 'conclude':
      return conclude(job, ask);
    case 'answer':
      return answerAlone(job.document, job);
  }
}

function list(job: ListJob, talk: Talk): ListEnd {
  const run = openRun(readPlan(job.plan), job.stage, { from: job.from, to: job.to }, job.checkpoint ?? undefined);
  return paceRun(run, { ...job, ...talk, findings: new Findings(run) });
}

class Findings extends FoundPacker {
  constructor(private readonly run: Run) {
    super();
  }

  collect(): void {
    this.add(this.run.takeFound());
  }
}
