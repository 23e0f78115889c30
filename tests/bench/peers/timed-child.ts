/**
 * Runs one program under a limit of CPU seconds and reports what it used (user + system, of it and all it waited for), by
 * the shell's `time`; a program that exceeds the limit is stopped by the kernel. Three times the limit by the clock stops one
 * that does not compute at all.
 */
import { spawnSync } from 'node:child_process';

export interface TimedChild {
  readonly cpuSeconds: number;
  readonly overLimit: boolean;
  readonly status: number | null;
  readonly stdout: Buffer;
  readonly stderr: string;
}

const MOST_OUTPUT_BYTES = 2 ** 30;

export function timedChild(
  command: readonly string[],
  limits: { readonly cpuSeconds: number; readonly input?: string | Uint8Array; readonly cpus?: string },
): TimedChild {
  const clock = Math.ceil(3 * limits.cpuSeconds);
  const pinned = limits.cpus === undefined ? command : ['taskset', '-c', limits.cpus, ...command];
  const script = `ulimit -t ${Math.ceil(limits.cpuSeconds)}; TIMEFORMAT=$'\\n%3U %3S'; time timeout ${clock} "$@"`;
  const child = spawnSync('bash', ['-c', script, 'bash', ...pinned], {
    input: limits.input ?? '',
    maxBuffer: MOST_OUTPUT_BYTES,
  });
  if (child.error !== undefined) throw child.error;
  const stderr = child.stderr.toString('utf8').trimEnd();
  const [user, system] = stderr
    .slice(stderr.lastIndexOf('\n') + 1)
    .split(' ')
    .map(Number);
  const cpuSeconds = user! + system!;
  const stopped = child.status === null || child.status >= 124;
  return {
    cpuSeconds,
    overLimit: stopped && (cpuSeconds >= 0.95 * limits.cpuSeconds || child.status === 124),
    status: child.status,
    stdout: child.stdout,
    stderr: stderr.slice(0, Math.max(0, stderr.lastIndexOf('\n'))).trim(),
  };
}

/** Whether a program can be started at all: nothing is ever installed here. */
export function isInstalled(program: string): boolean {
  return spawnSync('bash', ['-c', 'command -v "$1"', 'bash', program]).status === 0;
}
