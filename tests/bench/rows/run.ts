/** Node rate of the row engine beside the same loop compiled by g++ -O3: same problems, same run, CPU seconds, ratio. */
import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { buildLattice, readSourceText, reducedBasis, type Source } from '@palmette/lattice';
import { choosePlan, nextStep, openRun } from '@palmette/search';
import { planGram } from './plan-gram.ts';

const source = fileURLToPath(new URL('rows.cpp', import.meta.url));
const binary = join(mkdtempSync(join(tmpdir(), 'palmette-rows-')), 'rows');
execFileSync('g++', ['-O3', '-march=native', '-o', binary, source]);

const PROBLEMS: readonly (readonly [string, Source, number])[] = [
  [
    'three chains [5,5,5]',
    { kind: 'sum', of: [1, 2, 3].map(() => ({ kind: 'fraction', p: 115, q: 24, orientation: 'chain' }) as const) },
    1,
  ],
  ['⟨17⟩ + ⟨18⟩ + ⟨20⟩', { kind: 'sum', of: [17, 18, 20].map((m) => ({ kind: 'matrix', rows: [[m]] }) as const) }, 5],
  ['chain [5]^9', readSourceText('[5,5,5,5,5,5,5,5,5]'), 2],
  ['chain [4]^12', readSourceText('[4,4,4,4,4,4,4,4,4,4,4,4]'), 1],
];
const ROUNDS = 3;
const median = (list: number[]) => list.sort((a, b) => a - b)[Math.floor(list.length / 2)]!;

console.log('| problem | nodes | JavaScript, s | g++ -O3, s | ratio | nodes a second |\n|---|---|---|---|---|---|');
for (const [name, problem, excess] of PROBLEMS) {
  const { gram } = reducedBasis(buildLattice(problem));
  const plan = choosePlan({ gram, target: { excess }, scope: 'all', seed: 1 }, () => null);
  const step = nextStep(plan, [], () => null);
  if (!('stage' in step)) throw new Error('expected a stage');
  const working = planGram(plan);
  const input = [
    `${plan.order.length} ${step.stage.dimension}`,
    ...plan.order.map((v) => plan.order.map((w) => working[v]![w]!).join(' ')),
  ].join('\n');
  const ours: number[] = [];
  const theirs: number[] = [];
  let nodes = 0n;
  for (let round = 0; round < ROUNDS; round += 1) {
    const run = openRun(plan, step.stage, { from: [], to: null });
    const before = process.cpuUsage();
    while (run.advance(100_000) !== 'done') run.takeFound();
    const used = process.cpuUsage(before);
    ours.push((used.user + used.system) / 1e6);
    nodes = run.nodes;
    const timed = spawnSync('bash', ['-c', `TIMEFORMAT='%U'; time ${binary}`], { input, encoding: 'utf8' });
    if (timed.stdout.split(' ')[0] !== String(nodes))
      throw new Error(`${name}: ${timed.stdout.trim()} against ${nodes}`);
    theirs.push(Number(timed.stderr.trim()));
  }
  const [a, b] = [median(ours), median(theirs)];
  console.log(
    `| ${name}, n − r = ${excess} | ${nodes} | ${a.toFixed(2)} | ${b.toFixed(2)} | ${(a / b).toFixed(2)} | ${Math.round(Number(nodes) / a)} |`,
  );
}
