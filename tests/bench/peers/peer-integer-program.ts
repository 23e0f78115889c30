/**
 * Peer 3: an integer program over dual vectors. Columns of an embedding are vectors c with cᵀ·Q⁻¹·c ≤ 1, listed by PARI's
 * qfminim (flag 2) on det·Q⁻¹; then cbc looks for integers y ≥ 0 with Σ y_k·c_k·c_kᵀ = Q and Σ y_k ≤ n. Existence only.
 */
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { overLimit, verifyWitness, type Answer, type Problem, type Solver } from './solver.ts';
import { isInstalled, timedChild } from './timed-child.ts';

/** Twice the terms of the program: beyond this its file is over half a gigabyte and cbc would not read it within the limit. */
const MOST_TERMS = 60_000_000;

export const integerProgramPeer: Solver = {
  name: 'integer program (gp, cbc)',
  missing: ['gp', 'cbc'].find((program) => !isInstalled(program)) ?? null,
  scopes: ['one'],
  startUp: () => solve({ gram: [[1]], dimension: 1, scope: 'one', document: '' }, 10).cpuSeconds,
  solve,
};

function solve(problem: Problem, cpuLimit: number): Answer {
  const folder = mkdtempSync(join(tmpdir(), 'peer-ip-'));
  try {
    const listed = dualVectors(problem.gram, cpuLimit);
    if (!('vectors' in listed)) return listed;
    const { vectors } = listed;
    const figures = { vectors: vectors.length, listCpuSeconds: listed.cpuSeconds };
    if (vectors.length * problem.gram.length ** 2 > MOST_TERMS)
      return { outcome: 'failed', cpuSeconds: listed.cpuSeconds, figures: { ...figures, why: 'program too large' } };
    const before = process.cpuUsage();
    const [program, solution] = [join(folder, 'problem.lp'), join(folder, 'solution')];
    writeFileSync(program, linearProgram(problem, vectors));
    const { user, system } = process.cpuUsage(before);
    const spent = listed.cpuSeconds + (user + system) / 1e6;
    if (spent >= cpuLimit) return overLimit(spent, figures);
    const child = timedChild(['cbc', program, 'solve', 'solution', solution], { cpuSeconds: cpuLimit - spent });
    const cpuSeconds = spent + child.cpuSeconds;
    if (child.overLimit) return overLimit(cpuSeconds, figures);
    const [status, ...lines] = readSolution(solution);
    if (/infeasible/i.test(status)) return { outcome: 'excluded', cpuSeconds, figures };
    if (!status.startsWith('Optimal')) return { outcome: 'failed', cpuSeconds, figures: { ...figures, why: status } };
    verifyWitness(problem.gram, witness(problem, vectors, lines));
    return { outcome: 'embeds', cpuSeconds, figures };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

function readSolution(file: string): [string, ...string[]] {
  try {
    return readFileSync(file, 'utf8').split('\n') as [string, ...string[]];
  } catch {
    return ['no solution file'];
  }
}

function dualVectors(
  gram: Problem['gram'],
  cpuLimit: number,
): Answer | { readonly vectors: number[][]; readonly cpuSeconds: number } {
  const matrix = `[${gram.map((row) => row.join(',')).join(';')}]`;
  const script = `default(parisizemax, 2*10^9)
Q = ${matrix}; d = matdet(Q); v = qfminim(d*Q^-1, d,, 2)[3];
for(k = 1, #v, print(Vec(v[,k])));\n`;
  const child = timedChild(['gp', '-q', '-f'], { cpuSeconds: cpuLimit, input: script });
  if (child.overLimit) return overLimit(child.cpuSeconds, { stoppedAt: 'list' });
  const lines = child.stdout.toString('utf8').trim().split('\n');
  if (child.stderr.includes('at top-level') || lines.some((line) => line !== '' && !line.startsWith('['))) {
    return { outcome: 'failed', cpuSeconds: child.cpuSeconds, figures: { why: child.stderr || lines[0]! } };
  }
  return { vectors: lines.filter(Boolean).map((line) => JSON.parse(line)), cpuSeconds: child.cpuSeconds };
}

/** In cbc's LP format; an equation without a term is 0 = its value. */
function linearProgram({ gram, dimension }: Problem, vectors: readonly (readonly number[])[]): string {
  const names = vectors.map((_, k) => `y${k}`);
  const equations = gram.flatMap((row, i) =>
    row.slice(0, i + 1).map((value, j) => {
      const terms = vectors.map((c, k) => [c[i]! * c[j]!, names[k]!] as const).filter(([factor]) => factor !== 0);
      const left = terms.length === 0 ? '0 none' : terms.map(([f, y]) => `${f < 0 ? '-' : '+'} ${Math.abs(f)} ${y}`);
      return ` e${i}_${j}: ${typeof left === 'string' ? left : folded(left)} = ${value}`;
    }),
  );
  return [
    'Minimize\n obj: 0 none\nSubject To',
    ...equations,
    ` width: ${names.length === 0 ? '0 none' : folded(names.map((y) => `+ ${y}`))} <= ${dimension}`,
    'Bounds\n 0 <= none <= 1',
    ...names.map((y) => ` 0 <= ${y} <= ${dimension}`),
    `Generals\n ${folded([...names, 'none'])}\nEnd\n`,
  ].join('\n');
}

/** Lines of the format are short. */
function folded(terms: readonly string[]): string {
  const lines: string[] = [];
  for (let k = 0; k < terms.length; k += 10) lines.push(terms.slice(k, k + 10).join(' '));
  return lines.join('\n  ');
}

/** A has the column c_k as often as y_k says, and zero columns to fill. */
function witness({ gram, dimension }: Problem, vectors: readonly (readonly number[])[], lines: string[]): number[][] {
  const columns: (readonly number[])[] = [];
  for (const line of lines) {
    const found = /^\s*(?:\*\*)?\s*\d+\s+y(\d+)\s+(\S+)/.exec(line);
    if (found === null) continue;
    for (let times = Math.round(Number(found[2])); times > 0; times -= 1) columns.push(vectors[Number(found[1])]!);
  }
  while (columns.length < dimension) columns.push(gram.map(() => 0));
  return gram.map((_, i) => columns.map((column) => column[i]!));
}
