/** Runs a program with input and output in files, watching the resident memory of its whole process tree in /proc. */
import { closeSync, openSync, readFileSync, readdirSync } from 'node:fs';
import { spawn } from 'node:child_process';

export interface Watched {
  readonly status: number | null;
  readonly cpuSeconds: number;
  readonly wallSeconds: number;
  readonly peakBytes: number;
}

const EVERY_MS = 100;
const PAGE_BYTES = 4096;

export async function watchedProcess(
  command: readonly string[],
  files: { readonly input: string; readonly output: string },
): Promise<Watched> {
  const [input, output] = [openSync(files.input, 'r'), openSync(files.output, 'w')];
  const script = `TIMEFORMAT=$'\\n%3U %3S'; time "$@"`;
  const started = performance.now();
  const child = spawn('bash', ['-c', script, 'bash', ...command], { stdio: [input, output, 'pipe'] });
  let said = '';
  child.stderr!.on('data', (chunk) => (said = (said + chunk).slice(-10_000)));
  let peakBytes = 0;
  const watch = setInterval(() => (peakBytes = Math.max(peakBytes, treeBytes(child.pid!))), EVERY_MS);
  const status = await new Promise<number | null>((resolve, reject) => {
    child.on('error', reject);
    child.on('close', resolve);
  });
  clearInterval(watch);
  closeSync(input);
  closeSync(output);
  const [user, system] = said.trimEnd().split('\n').at(-1)!.split(' ').map(Number);
  return { status, cpuSeconds: user! + system!, wallSeconds: (performance.now() - started) / 1000, peakBytes };
}

/** Resident bytes of a process and all that it started. */
function treeBytes(root: number): number {
  const children = new Map<number, number[]>();
  const bytes = new Map<number, number>();
  for (const name of readdirSync('/proc')) {
    if (!/^\d+$/.test(name)) continue;
    const stat = readStat(name);
    if (stat === null) continue;
    bytes.set(Number(name), stat.bytes);
    children.set(stat.parent, [...(children.get(stat.parent) ?? []), Number(name)]);
  }
  const total = (pid: number): number =>
    (children.get(pid) ?? []).reduce((sum, child) => sum + total(child), bytes.get(pid) ?? 0);
  return total(root);
}

/** Null for a process that ended meanwhile. */
function readStat(pid: string): { parent: number; bytes: number } | null {
  try {
    const text = readFileSync(`/proc/${pid}/stat`, 'utf8');
    // after the name in brackets: state, parent, …; resident pages are field 24
    const fields = text.slice(text.lastIndexOf(')') + 2).split(' ');
    return { parent: Number(fields[1]), bytes: Number(fields[21]) * PAGE_BYTES };
  } catch {
    return null;
  }
}
