/**
 * Ours, as a user runs it: the command line's `answer` on a question document, by the bundle built at the start of the run.
 * The CPU time is that of the whole process and so holds reading the question, the search, writing the certificate and
 * checking it.
 */
import { execFileSync } from 'node:child_process';
import { mkdirSync, rmSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { join } from 'node:path';
import { gzipSync } from 'node:zlib';
import { overLimit, type Answer, type Problem, type Solver } from './solver.ts';
import { timedChild, type TimedChild } from './timed-child.ts';

const EXIT = { settled: 0, open: 3 };
const TRIVIAL = {
  format: 'palmette.question/1',
  source: { kind: 'matrix', rows: [[1]] },
  target: { dimension: 1 },
  scope: 'one',
};

export interface CommandLine {
  answer(document: string, limits: { cpuSeconds: number; cpus?: string; lines?: boolean }): TimedChild;
  check(certificate: Buffer, limits: { cpuSeconds: number }): TimedChild;
  readonly program: string;
  remove(): void;
}

/** A bundle of its own, so that no change of the sources comes between two figures. */
export function bundleCommandLine(): CommandLine {
  const root = fileURLToPath(new URL('../../..', import.meta.url));
  const folder = join(root, `.palmette/bench-cli-${process.pid}`);
  mkdirSync(folder, { recursive: true });
  const build = `import { buildCli } from './docker-free-scripts/build.mjs'; await buildCli(process.argv[1]);`;
  execFileSync(process.execPath, ['--input-type=module', '-e', build, folder], { cwd: root });
  const program = join(folder, 'palmette.js');
  return {
    program,
    answer: (input, { lines, ...limits }) =>
      timedChild([process.execPath, program, 'answer', ...(lines === true ? ['--lines'] : []), '-'], {
        ...limits,
        input,
      }),
    check: (certificate, limits) =>
      timedChild([process.execPath, program, 'check', '-'], { ...limits, input: certificate }),
    remove: () => rmSync(folder, { recursive: true, force: true }),
  };
}

export function ourSolver(cli: CommandLine): Solver {
  return {
    name: 'Palmette',
    missing: null,
    scopes: ['one', 'all'],
    startUp: () => cli.answer(JSON.stringify(TRIVIAL), { cpuSeconds: 10 }).cpuSeconds,
    solve: ({ document }: Problem, cpuLimit): Answer => {
      const child = cli.answer(document, { cpuSeconds: cpuLimit });
      const { cpuSeconds } = child;
      if (child.overLimit) return overLimit(cpuSeconds);
      if (child.status !== EXIT.settled) {
        return { outcome: 'failed', cpuSeconds, figures: { why: child.stderr.split('\n').slice(0, 8).join(' ') } };
      }
      return { cpuSeconds, ...readCertificate(child.stdout, cli) };
    },
  };
}

/** What the certificate claims, its sizes, and what its check takes. */
function readCertificate(bytes: Buffer, cli: CommandLine): Omit<Answer, 'cpuSeconds'> {
  const { claim, evidence } = JSON.parse(bytes.toString('utf8').split('\n')[0]!);
  const check = cli.check(bytes, { cpuSeconds: 120 });
  return {
    outcome: claim.verdict,
    ...(claim.complete ? { orbits: Number(claim.orbits) } : {}),
    figures: {
      ground: claim.ground,
      method: methodOf(evidence),
      certificateBytes: bytes.length,
      certificateGzipBytes: gzipSync(bytes).length,
      checkCpuSeconds: check.cpuSeconds,
      checkSays: check.overLimit ? 'over the limit' : check.stdout.toString('utf8').trim().split(' ')[0]!,
    },
  };
}

interface Tree {
  readonly method: string;
  readonly nodes?: string;
  readonly vectors?: string;
}

function methodOf(evidence: { list: Tree | null; exclusions: { tree?: Tree }[] }): string {
  const tree = evidence.list ?? evidence.exclusions.at(-1)?.tree ?? null;
  if (tree === null) return '';
  if (tree.nodes !== undefined) return `${tree.method}, ${tree.nodes} nodes`;
  return tree.vectors === undefined ? `${tree.method} by gluing` : `${tree.method}, ${tree.vectors} vectors`;
}
