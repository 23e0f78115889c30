/**
 * npm run bench:peers: ours beside what a practitioner would put together, CPU seconds, on the same instances in one run.
 * Options: --only=TEXT (instances whose name holds it), --solvers=TEXT,TEXT (names hold one of them), --limit=SECONDS (120),
 * --for=SECONDS (start nothing new after that; run again to go on), --fresh (forget what was measured), --tables (only print).
 */
import { rmSync } from 'node:fs';
import { parseArgs } from 'node:util';
import { bundleCommandLine, ourSolver } from './ours.ts';
import { integerProgramPeer } from './peer-integer-program.ts';
import { rowsPeer } from './peer-rows.ts';
import { satPeer } from './peer-sat.ts';
import { existenceInstances, listInstances, type Instance } from './instances.ts';
import { problemOf } from './problem.ts';
import { addRecord, readRecords, recordFile, type PeerRecord } from './records.ts';
import { median, type Answer, type Solver } from './solver.ts';
import { printTables } from './tables.ts';

const { values } = parseArgs({
  options: {
    only: { type: 'string', default: '' },
    solvers: { type: 'string', default: '' },
    limit: { type: 'string', default: '120' },
    for: { type: 'string', default: 'Infinity' },
    fresh: { type: 'boolean', default: false },
    tables: { type: 'boolean', default: false },
  },
});
const limit = Number(values.limit);
const file = recordFile('peers');
/** Above this one run is enough: its spread is small beside its size. */
const MEDIAN_BELOW_SECONDS = 10;
const RUNS = 3;

if (values.fresh) rmSync(file, { force: true });
const cli = values.tables ? null : bundleCommandLine();
try {
  if (cli !== null) measure([ourSolver(cli), rowsPeer, satPeer, integerProgramPeer]);
} finally {
  cli?.remove();
}
printTables(readRecords<PeerRecord>(file));

function measure(solvers: readonly Solver[]): void {
  const started = performance.now();
  const wanted = values.solvers.split(',');
  const chosen = solvers.filter(({ name }) => wanted.some((part) => name.includes(part)));
  for (const { name, missing } of chosen)
    if (missing !== null) console.log(`${name}: not measured, ${missing} is missing`);
  const present = chosen.filter(({ missing }) => missing === null);
  const known = readRecords<PeerRecord>(file);
  const has = (instance: string, solver: string) => known.some((r) => r.instance === instance && r.solver === solver);
  for (const solver of present)
    if (!has('start-up', solver.name)) {
      const cpuSeconds = median(Array.from({ length: RUNS }, () => solver.startUp()));
      note({
        instance: 'start-up',
        solver: solver.name,
        outcome: 'embeds',
        cpuSeconds,
        figures: {},
        limit,
        runs: RUNS,
      });
    }
  for (const instance of [...existenceInstances(), ...listInstances()].filter(({ name }) => name.includes(values.only)))
    for (const solver of present) {
      if (has(instance.name, solver.name) || !solver.scopes.includes(instance.document.scope)) continue;
      if ((performance.now() - started) / 1000 > Number(values.for)) return;
      note({ instance: instance.name, solver: solver.name, limit, ...measureOne(instance, solver, known) });
    }

  function note(record: PeerRecord): void {
    known.push(record);
    addRecord(file, record);
    const { instance, solver, outcome, cpuSeconds, figures } = record;
    console.error(`${instance} | ${solver}: ${outcome} ${cpuSeconds.toFixed(2)} s ${JSON.stringify(figures)}`);
  }
}

type Measured = Answer & Pick<PeerRecord, 'runs' | 'skipped'>;

function measureOne(instance: Instance, solver: Solver, known: readonly PeerRecord[]): Measured {
  if (overAtSmallerRank(instance, solver, known)) {
    return { outcome: 'over the limit', cpuSeconds: 0, figures: {}, runs: 0, skipped: true };
  }
  const problem = problemOf(instance);
  const answers = [solver.solve(problem, limit)];
  if (answers[0]!.outcome !== 'over the limit' && answers[0]!.cpuSeconds < MEDIAN_BELOW_SECONDS)
    while (answers.length < RUNS) answers.push(solver.solve(problem, limit));
  return { ...answers[0]!, cpuSeconds: median(answers.map((a) => a.cpuSeconds)), runs: answers.length };
}

/** Ours is always run; a peer that was stopped at a smaller rank of the same kind is not run again at a greater one. */
function overAtSmallerRank(instance: Instance, solver: Solver, known: readonly PeerRecord[]): boolean {
  if (solver.name === 'Palmette' || instance.class === 'list') return false;
  const kind = (name: string) => name.replace(/ \d+ /, ' ');
  const rank = (name: string) => Number(/ (\d+) /.exec(name)?.[1]);
  return known.some(
    (r) =>
      r.solver === solver.name &&
      r.outcome === 'over the limit' &&
      kind(r.instance) === kind(instance.name) &&
      rank(r.instance) < instance.rank,
  );
}
