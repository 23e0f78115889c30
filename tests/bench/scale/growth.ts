/**
 * CPU time against rank: for each class and n − r the instances of bench:peers at growing rank, three of each rank, until two of three are over the limit; a growth law is fitted to what was measured.
 */
import { bundleCommandLine, ourSolver } from '../peers/ours.ts';
import { drawSource, instance, type Drawn, type Making } from '../peers/instances.ts';
import { problemOf } from '../peers/problem.ts';
import { addRecord, readRecords, recordFile } from '../peers/records.ts';
import { median, type Answer, type Solver } from '../peers/solver.ts';
import { fitGrowth } from './fit-growth.ts';

interface Series {
  readonly kind: Drawn;
  readonly how: Making;
  readonly excess: number;
  readonly ranks: readonly number[];
}

const [EVERY, STEEP] = [
  [16, 24, 32, 40, 48, 64],
  [8, 9, 10, 11, 12, 13, 14, 15, 16, 18, 20],
];
const HEAVY = [12, 16, 20, 24, 26, 28, 30, 32, 36];
const trees = (kind: 'chain' | 'star'): Series[] => [
  { kind, how: 'made', excess: 0, ranks: [...EVERY!, 96, 128] },
  ...[1, 2].flatMap((excess) => [
    { kind, how: 'drawn' as const, excess, ranks: EVERY! },
    { kind, how: 'heavy' as const, excess, ranks: HEAVY },
  ]),
];
const SERIES: readonly Series[] = [
  ...trees('chain'),
  ...trees('star'),
  ...[0, 1, 2].flatMap((excess) =>
    (['drawn', 'heavy'] as const).map((how) => ({ kind: 'scrambled' as const, how, excess, ranks: STEEP! })),
  ),
];
const nameOf = ({ kind, how, excess }: Omit<Series, 'ranks'>) => `${kind} +${excess} ${how}`;
const VARIANTS = [0, 1, 2];

export interface GrowthRecord extends Answer {
  readonly series: string;
  readonly rank: number;
  readonly variant: number;
  readonly limit: number;
}

export interface GrowthOptions {
  readonly limit: number;
  /** Starts nothing new after so many seconds. */
  readonly seconds: number;
  readonly only: string;
  readonly print: boolean;
}

const file = recordFile('growth');
const isOver = (r: Answer) => r.outcome === 'over the limit' || r.outcome === 'failed';

export function growth(options: GrowthOptions): void {
  if (!options.print) measure(options);
  printGrowth(readRecords<GrowthRecord>(file));
}

function measure({ limit, seconds, only }: GrowthOptions): void {
  const started = performance.now();
  const cli = bundleCommandLine();
  try {
    const solver = ourSolver(cli);
    if (!readRecords<{ startUp?: number }>(file).some((r) => r.startUp !== undefined))
      addRecord(file, { startUp: median(VARIANTS.map(() => solver.startUp())) });
    const inTime = () => (performance.now() - started) / 1000 <= seconds;
    for (const series of SERIES.filter((each) => nameOf(each).includes(only)))
      measureSeries(series, solver, limit, inTime);
  } finally {
    cli.remove();
  }
}

/** Stops at the first rank of which two of three are over the limit. */
function measureSeries(series: Series, solver: Solver, limit: number, inTime: () => boolean): void {
  const { kind, how, excess, ranks } = series;
  const known = readRecords<GrowthRecord>(file).filter((r) => r.series === nameOf(series));
  for (const rank of ranks) {
    for (const variant of VARIANTS) {
      if (known.some((r) => r.rank === rank && r.variant === variant)) continue;
      if (!inTime()) return;
      const source = drawSource(kind, rank, excess, how, variant);
      const question = instance(nameOf(series), { class: kind, rank, excess, source, scope: 'one' });
      const answer = solver.solve(problemOf(question), limit);
      const record: GrowthRecord = { series: nameOf(series), rank, variant, limit, ...answer };
      known.push(record);
      addRecord(file, record);
      console.error(`${record.series} rank ${rank} #${variant}: ${answer.outcome} ${answer.cpuSeconds.toFixed(2)} s`);
    }
    if (known.filter((r) => r.rank === rank && isOver(r)).length >= 2) return;
  }
}

function printGrowth(all: readonly (GrowthRecord & { startUp?: number })[]): void {
  const startUp = all.find((r) => r.startUp !== undefined)?.startUp ?? 0;
  const records = all.filter((r) => r.series !== undefined);
  console.log(`\nStart-up ${startUp.toFixed(2)} s is taken off. Median of three instances of each rank.\n`);
  console.log('| class, n − r, how made | CPU seconds at rank | growth |\n|---|---|---|');
  for (const series of SERIES) {
    const group = records.filter((r) => r.series === nameOf(series));
    if (group.length === 0) continue;
    const points = series.ranks.flatMap((rank) => {
      const here = group.filter((r) => r.rank === rank);
      if (here.length < VARIANTS.length) return [];
      const middle = median(here.map((r) => (isOver(r) ? Number.POSITIVE_INFINITY : r.cpuSeconds)));
      return [{ rank, seconds: Math.max(0, middle - startUp), limit: here[0]!.limit }];
    });
    const cells = points.map(({ rank, seconds, limit }) =>
      Number.isFinite(seconds) ? `${rank}: ${seconds.toFixed(2)}` : `${rank}: > ${limit}`,
    );
    console.log(`| ${nameOf(series)} | ${cells.join(', ')} | ${fitGrowth(points)} |`);
  }
  printChecks(records, startUp);
}

/** Solve against check, and sizes, of every exclusion that took a second or more. */
function printChecks(records: readonly GrowthRecord[], startUp: number): void {
  console.log('\n| excluded | method | answer, s | check, s | certificate, bytes | gzip |\n|---|---|---|---|---|---|');
  for (const r of records) {
    if (r.outcome !== 'excluded' || r.cpuSeconds < 1) continue;
    const f = r.figures;
    console.log(
      `| ${r.series} rank ${r.rank} #${r.variant} | ${f['method'] || f['ground']} | ${(r.cpuSeconds - startUp).toFixed(2)} | ${Number(f['checkCpuSeconds']).toFixed(2)} | ${f['certificateBytes']} | ${f['certificateGzipBytes']} |`,
    );
  }
}
