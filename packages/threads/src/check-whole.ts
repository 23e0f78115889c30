/** The checker on the bytes as written, in one go. */
import { check, CHECKER_REVISION } from '@palmette/checker';
import { CpuMeter } from './cpu-meter.ts';
import type { CheckerWord } from './jobs.ts';

export function checkAtOnce(certificate: readonly Uint8Array[]): CheckerWord {
  const meter = new CpuMeter();
  const outcome = check(Buffer.concat(certificate));
  return { verdict: outcome.verdict, line: outcome.line, revision: CHECKER_REVISION, cpuMs: meter.ms };
}
