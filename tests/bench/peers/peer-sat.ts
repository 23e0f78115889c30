/** Peer 2: cadical on the encoding, with its proof kept for the size of it. Existence only. */
import { mkdtempSync, rmSync, statSync, writeFileSync, readFileSync } from 'node:fs';
import { gzipSync } from 'node:zlib';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { encode } from './sat-encoding.ts';
import { overLimit, verifyWitness, type Answer, type Problem, type Solver } from './solver.ts';
import { isInstalled, timedChild } from './timed-child.ts';

const [SATISFIABLE, UNSATISFIABLE] = [10, 20];

export const satPeer: Solver = {
  name: 'SAT (cadical)',
  missing: isInstalled('cadical') ? null : 'cadical',
  scopes: ['one'],
  startUp: () => timedChild(['cadical', '-q', '/dev/stdin'], { cpuSeconds: 10, input: 'p cnf 1 1\n1 0\n' }).cpuSeconds,
  solve,
};

function solve(problem: Problem, cpuLimit: number): Answer {
  const folder = mkdtempSync(join(tmpdir(), 'peer-sat-'));
  try {
    const before = process.cpuUsage();
    const { cnf, decode } = encode(problem);
    const [input, proof] = [join(folder, 'problem.cnf'), join(folder, 'proof.drat')];
    writeFileSync(input, cnf.dimacs());
    const { user, system } = process.cpuUsage(before);
    const child = timedChild(['cadical', '-q', '--no-colors', input, proof], { cpuSeconds: cpuLimit });
    const cpuSeconds = child.cpuSeconds + (user + system) / 1e6;
    const figures = { variables: cnf.variables, clauses: cnf.clauses };
    if (child.overLimit) return overLimit(cpuSeconds, { ...figures, proofBytes: statSync(proof).size });
    if (child.status === UNSATISFIABLE) {
      const bytes = readFileSync(proof);
      const sizes = { proofBytes: bytes.length, proofGzipBytes: gzipSync(bytes).length };
      return { outcome: 'excluded', cpuSeconds, figures: { ...figures, ...sizes } };
    }
    if (child.status !== SATISFIABLE)
      return { outcome: 'failed', cpuSeconds, figures: { ...figures, why: child.stderr } };
    const literals = child.stdout.toString('utf8').matchAll(/-?\d+/g);
    const holds = new Set([...literals].map(([text]) => Number(text)));
    verifyWitness(
      problem.gram,
      decode((variable) => holds.has(variable)),
    );
    return { outcome: 'embeds', cpuSeconds, figures };
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}
