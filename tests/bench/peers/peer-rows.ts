/** Peer 1: the row script in a Node.js of its own. Its search is timed inside, apart from its start-up. */
import { fileURLToPath } from 'node:url';
import { overLimit, verifyWitness, type Answer, type Problem, type Solver } from './solver.ts';
import { timedChild } from './timed-child.ts';

const script = fileURLToPath(new URL('rows-script.ts', import.meta.url));
const command = [process.execPath, '--conditions=source', '--import', 'tsx', script];
const run = ({ gram, dimension, scope }: Omit<Problem, 'document'>, cpuSeconds: number) =>
  timedChild(command, { cpuSeconds, input: JSON.stringify({ gram, dimension, scope }) });

export const rowsPeer: Solver = {
  name: 'script by rows (JavaScript)',
  missing: null,
  scopes: ['one', 'all'],
  startUp: () => run({ gram: [[1]], dimension: 1, scope: 'one' }, 10).cpuSeconds,
  solve,
};

function solve(problem: Problem, cpuLimit: number): Answer {
  const child = run(problem, cpuLimit);
  if (child.overLimit) return overLimit(child.cpuSeconds);
  if (child.status !== 0) return { outcome: 'failed', cpuSeconds: child.cpuSeconds, figures: { why: child.stderr } };
  const said = JSON.parse(child.stdout.toString('utf8')) as {
    orbits: number;
    nodes: number;
    cpuSeconds: number;
    witness: number[][] | null;
  };
  const { orbits, nodes, cpuSeconds, witness } = said;
  if (witness !== null) verifyWitness(problem.gram, witness);
  const outcome = witness === null ? 'excluded' : 'embeds';
  return { outcome, cpuSeconds, figures: { nodes }, ...(problem.scope === 'all' ? { orbits } : {}) };
}
