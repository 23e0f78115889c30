/** A family: all p/q with p = m², 2 ≤ m ≤ M, both chains, at n = rank, through `answer --lines`; then every line is read again. */
import { createReadStream, mkdtempSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { createInterface } from 'node:readline';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { bundleCommandLine } from '../peers/ours.ts';
import { watchedProcess } from './watched-process.ts';

export function familyLines(most: number, scope: 'one' | 'all'): string[] {
  const lines: string[] = [];
  for (let m = 2; m <= most; m += 1)
    for (let q = 1; q < m * m; q += 1) {
      if (!isCoprime(m, q)) continue;
      for (const orientation of ['chain', 'dual']) {
        const source = { kind: 'fraction', p: m * m, q, orientation };
        lines.push(JSON.stringify({ format: 'palmette.question/1', source, target: { excess: 0 }, scope }));
      }
    }
  return lines;
}

function isCoprime(a: number, b: number): boolean {
  while (b !== 0) [a, b] = [b, a % b];
  return a === 1;
}

export async function families(options: { readonly most: number; readonly scope: 'one' | 'all' }): Promise<void> {
  const folder = mkdtempSync(join(tmpdir(), 'families-'));
  const cli = bundleCommandLine();
  try {
    const [input, output] = [join(folder, 'questions'), join(folder, 'certificates')];
    const lines = familyLines(options.most, options.scope);
    writeFileSync(input, `${lines.join('\n')}\n`);
    const ran = await watchedProcess([process.execPath, cli.program, 'answer', '--lines', '-'], { input, output });
    const grounds = await countGrounds(output);
    console.log(`\n| p = m², m ≤ ${options.most}, scope ${options.scope} | figure |\n|---|---|`);
    console.log(`| questions, exit | ${lines.length}, ${ran.status} |`);
    console.log(`| clock, CPU | ${ran.wallSeconds.toFixed(1)} s, ${ran.cpuSeconds.toFixed(1)} s |`);
    console.log(`| peak memory of the process tree | ${(ran.peakBytes / 2 ** 20).toFixed(0)} MiB |`);
    console.log(`| certificates | ${(statSync(output).size / 2 ** 20).toFixed(0)} MiB |`);
    for (const [ground, count] of grounds) console.log(`| ${ground} | ${count} |`);
  } finally {
    cli.remove();
    rmSync(folder, { recursive: true, force: true });
  }
}

async function countGrounds(file: string): Promise<Map<string, number>> {
  const counts = new Map<string, number>();
  for await (const line of createInterface({ input: createReadStream(file) })) {
    const { claim, error } = JSON.parse(line);
    const name = error === undefined ? `${claim.verdict}: ${claim.ground}` : `refused: ${error.code}`;
    counts.set(name, (counts.get(name) ?? 0) + 1);
  }
  return counts;
}
