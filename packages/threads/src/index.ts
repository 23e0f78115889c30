export type * from './jobs.ts';
export { openThreads, type RunningJob, type Threads } from './pool.ts';
export { choose } from './choose.ts';
export { answerAlone, CheckFailed, verified } from './answer-alone.ts';
export { answerOnAllCores } from './answer.ts';
export { CpuMeter } from './cpu-meter.ts';
export { understand, sha256, type Understood } from './understand.ts';
