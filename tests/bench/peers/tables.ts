/** The tables of bench:peers, in Markdown, from what was recorded. Disagreement of two solvers is an error, loudly. */
import { existenceInstances, listInstances, type Instance } from './instances.ts';
import type { PeerRecord } from './records.ts';

const OURS = 'Palmette';
/** Below this a time is start-up and noise, and a ratio of two such says nothing. */
const RATIO_FROM_SECONDS = 1;

export class Disagreement extends Error {
  override readonly name = 'Disagreement';
}

export function printTables(records: readonly PeerRecord[]): void {
  const solvers = [...new Set(records.map((r) => r.solver))];
  const startUp = new Map(
    records.filter((r) => r.instance === 'start-up').map((r) => [r.solver, r.cpuSeconds] as const),
  );
  const of = (instance: Instance) => records.filter((r) => r.instance === instance.name);
  console.log(`\nStart-up, CPU seconds: ${[...startUp].map(([s, t]) => `${s} ${t.toFixed(2)}`).join('; ')}\n`);
  const instances = [...existenceInstances(), ...listInstances()].filter((i) => of(i).length > 0);
  for (const instance of instances) agree(instance, of(instance));
  printTimes(solvers, instances, of, (r) => time(r, startUp));
  printRatios(instances, of, startUp);
  printCertificates(instances, of);
}

function agree(instance: Instance, records: readonly PeerRecord[]): void {
  const settled = records.filter((r) => r.outcome === 'embeds' || r.outcome === 'excluded');
  const verdicts = new Set(settled.map((r) => r.outcome));
  const counts = new Set(settled.flatMap((r) => (instance.document.scope === 'all' ? [r.orbits] : [])));
  if (verdicts.size > 1 || counts.size > 1)
    throw new Disagreement(
      `${instance.name}: ${settled.map((r) => `${r.solver} ${r.outcome} ${r.orbits ?? ''}`).join('; ')}`,
    );
}

/** Seconds without start-up; the script by rows is timed inside. */
function net(record: PeerRecord, startUp: ReadonlyMap<string, number>): number {
  const own = record.solver.startsWith('script') ? 0 : (startUp.get(record.solver) ?? 0);
  return Math.max(0, record.cpuSeconds - own);
}

function time(record: PeerRecord, startUp: ReadonlyMap<string, number>): string {
  if (record.skipped === true) return 'not run';
  if (record.outcome === 'over the limit') return `> ${record.limit}`;
  if (record.outcome === 'failed') return 'failed';
  return `${net(record, startUp).toFixed(2)}${record.runs === 1 ? '¹' : ''}`;
}

function printTimes(
  solvers: readonly string[],
  instances: readonly Instance[],
  of: (instance: Instance) => PeerRecord[],
  show: (record: PeerRecord) => string,
): void {
  console.log(`| instance | n − r | answer | ${solvers.join(' | ')} | ours: method |`);
  console.log(`|---|---|---|${solvers.map(() => '---|').join('')}---|`);
  for (const instance of instances) {
    const records = of(instance);
    const by = (solver: string) => records.find((r) => r.solver === solver);
    const settled = records.find((r) => r.outcome === 'embeds' || r.outcome === 'excluded');
    const orbits = settled?.orbits ? `, ${settled.orbits} orbits` : '';
    const cells = solvers.map((solver) => (by(solver) === undefined ? '' : show(by(solver)!)));
    const { ground = '', method = '' } = by(OURS)?.figures ?? {};
    console.log(
      `| ${instance.name} | ${instance.excess} | ${settled === undefined ? 'open' : settled.outcome + orbits} | ${cells.join(' | ')} | ${method || ground} |`,
    );
  }
  console.log(
    '\n¹ one run; the others are medians of three. "not run": over the limit at a smaller rank of the same kind.\n',
  );
}

/** Best peer over ours, per class and n − r, where the best peer needs a second or more; a time-out counts as its limit. */
function printRatios(
  instances: readonly Instance[],
  of: (instance: Instance) => PeerRecord[],
  startUp: ReadonlyMap<string, number>,
): void {
  console.log(
    '| class | n − r | instances | settled by ours | settled by a peer | best peer ÷ ours, where that peer needs ≥ 1 s |',
  );
  console.log('|---|---|---|---|---|---|');
  for (const kind of ['chain', 'star', 'scrambled', 'list'] as const)
    for (const excess of [...new Set(instances.filter((i) => i.class === kind).map((i) => i.excess))].sort()) {
      const group = instances.filter((i) => i.class === kind && i.excess === excess);
      const settles = (r: PeerRecord) => r.outcome === 'embeds' || r.outcome === 'excluded';
      const ratios = group.flatMap((i) => {
        const ours = of(i).find((r) => r.solver === OURS);
        const peers = of(i).filter((r) => r.solver !== OURS && r.outcome !== 'failed');
        if (ours === undefined || peers.length === 0) return [];
        const best = Math.min(...peers.map((r) => (settles(r) ? net(r, startUp) : r.limit)));
        if (best < RATIO_FROM_SECONDS) return [];
        // a peer that was stopped may be the best: then the ratio is a lower bound
        const open = peers.some((r) => !settles(r) && r.limit <= best);
        if (!settles(ours)) return open ? [] : [`< ${rounded(best / ours.limit)}`];
        return [`${open ? '> ' : ''}${rounded(best / Math.max(0.01, net(ours, startUp)))}`];
      });
      const none = group.some((i) => of(i).some((r) => r.solver !== OURS)) ? 'none needs 1 s' : 'no peer measured';
      const count = (test: (r: PeerRecord) => boolean) => group.filter((i) => of(i).some(test)).length;
      console.log(
        `| ${kind} | ${excess} | ${group.length} | ${count((r) => r.solver === OURS && settles(r))} | ${count((r) => r.solver !== OURS && settles(r))} | ${ratios.join(', ') || none} |`,
      );
    }
  console.log(
    '\n"> x": the best peer was stopped at its limit, x is the limit over ours. A time below 0.01 s counts as 0.01 s.\n',
  );
}

const rounded = (ratio: number) => String(Number(ratio.toPrecision(2)));

function printCertificates(instances: readonly Instance[], of: (instance: Instance) => PeerRecord[]): void {
  console.log(
    '| excluded instance | certificate, bytes | gzip | check, s | cadical proof, bytes | gzip |\n|---|---|---|---|---|---|',
  );
  for (const instance of instances) {
    const ours = of(instance).find((r) => r.solver === OURS);
    const sat = of(instance).find((r) => r.solver.startsWith('SAT'));
    if (ours?.outcome !== 'excluded') continue;
    const f = ours.figures;
    const proof = sat?.outcome === 'excluded' ? [sat.figures['proofBytes'], sat.figures['proofGzipBytes']] : ['—', '—'];
    console.log(
      `| ${instance.name} | ${f['certificateBytes']} | ${f['certificateGzipBytes']} | ${Number(f['checkCpuSeconds']).toFixed(2)} | ${proof.join(' | ')} |`,
    );
  }
}
