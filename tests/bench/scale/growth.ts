/**
 * CPU time against rank: for each class and n − r the drawn instances of bench:peers at growing rank, three of each rank,
 * until two of three are over the limit; a growth law is fitted to what was measured.
 */
import { bundleCommandLine, ourSolver } from '../peers/ours.ts';
import { drawSource, instance } from '../peers/instances.ts';
import { problemOf } from '../peers/problem.ts';
import { addRecord, readRecords, recordFile } from '../peers/records.ts';
import { median, type Answer } from '../peers/solver.ts';
import { fitGrowth } from './fit-growth.ts';

const RANKS = {
  chain: [16, 24, 32, 40, 48, 64],
  star: [16, 20, 24, 28, 32, 36, 44, 52],
  scrambled: [8, 9, 10, 11, 12, 13, 14, 15, 16, 18, 20],
} as const;
type Kind = keyof typeof RANKS;
const EXCESSES = [0, 1, 2];
const VARIANTS = [0, 1, 2];

export interface GrowthRecord extends Answer {
  readonly kind: Kind;
  readonly excess: number;
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
    for (const kind of ['chain', 'star', 'scrambled'] as const)
      for (const excess of EXCESSES)
        for (const rank of RANKS[kind]) {
          if (!`${kind} +${excess}`.includes(only)) continue;
          const known = readRecords<GrowthRecord>(file).filter((r) => r.kind === kind && r.excess === excess);
          const before = known.filter((r) => r.rank < rank);
          if (RANKS[kind].some((smaller) => before.filter((r) => r.rank === smaller && isOver(r)).length >= 2)) break;
          for (const variant of VARIANTS) {
            if (known.some((r) => r.rank === rank && r.variant === variant)) continue;
            if ((performance.now() - started) / 1000 > seconds) return;
            const source = drawSource(kind, rank, excess, false, variant);
            const question = instance(`${kind} ${rank} +${excess}`, {
              class: kind,
              rank,
              excess,
              source,
              scope: 'one',
            });
            const answer = solver.solve(problemOf(question), limit);
            const record: GrowthRecord = { kind, excess, rank, variant, limit, ...answer };
            addRecord(file, record);
            console.error(`${question.name} #${variant}: ${answer.outcome} ${answer.cpuSeconds.toFixed(2)} s`);
          }
        }
  } finally {
    cli.remove();
  }
}

function printGrowth(all: readonly (GrowthRecord & { startUp?: number })[]): void {
  const startUp = all.find((r) => r.startUp !== undefined)?.startUp ?? 0;
  const records = all.filter((r) => r.kind !== undefined);
  console.log(`\nStart-up ${startUp.toFixed(2)} s is taken off. Median of three drawn instances of each rank.\n`);
  console.log('| class | n − r | CPU seconds at rank | growth |\n|---|---|---|---|');
  for (const kind of Object.keys(RANKS) as Kind[])
    for (const excess of EXCESSES) {
      const group = records.filter((r) => r.kind === kind && r.excess === excess);
      if (group.length === 0) continue;
      const points = RANKS[kind].flatMap((rank) => {
        const here = group.filter((r) => r.rank === rank);
        if (here.length < VARIANTS.length) return [];
        const middle = median(here.map((r) => (isOver(r) ? Number.POSITIVE_INFINITY : r.cpuSeconds)));
        return [{ rank, seconds: Math.max(0, middle - startUp), limit: here[0]!.limit }];
      });
      const cells = points.map(({ rank, seconds, limit }) =>
        Number.isFinite(seconds) ? `${rank}: ${seconds.toFixed(2)}` : `${rank}: > ${limit}`,
      );
      console.log(`| ${kind} | ${excess} | ${cells.join(', ')} | ${fitGrowth(points)} |`);
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
      `| ${r.kind} ${r.rank} +${r.excess} #${r.variant} | ${f['method'] || f['ground']} | ${(r.cpuSeconds - startUp).toFixed(2)} | ${Number(f['checkCpuSeconds']).toFixed(2)} | ${f['certificateBytes']} | ${f['certificateGzipBytes']} |`,
    );
  }
}
