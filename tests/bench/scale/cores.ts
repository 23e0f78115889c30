/** Two cores against one on one long search: the same question with the process kept on one core, then on two. */
import { chainOf } from '../peers/instance-sources.ts';
import { readFileSync } from 'node:fs';
import { bundleCommandLine } from '../peers/ours.ts';

const LIMIT_SECONDS = 600;

/** All embeddings of the chain [5]^11 in Z^14 by rows: more than a minute on one core. */
const QUESTION = {
  format: 'palmette.question/1',
  source: chainOf(Array.from({ length: 11 }, () => 5)),
  target: { excess: 3 },
  scope: 'all',
  method: 'rows',
};

export function cores(): void {
  const cli = bundleCommandLine();
  try {
    const document = JSON.stringify(QUESTION);
    console.log(
      `\n\`${document}\`\n\n| cores | clock, s | CPU, s | CPU of everything else meanwhile, s | exit |\n|---|---|---|---|---|`,
    );
    const clocks = ['0', '0,1'].map((cpus) => {
      const [before, busyBefore] = [performance.now(), busySeconds()];
      const child = cli.answer(document, { cpuSeconds: LIMIT_SECONDS, cpus });
      const clock = (performance.now() - before) / 1000;
      const others = Math.max(0, busySeconds() - busyBefore - child.cpuSeconds);
      console.log(
        `| ${cpus.split(',').length} | ${clock.toFixed(1)} | ${child.cpuSeconds.toFixed(1)} | ${others.toFixed(1)} | ${child.status} |`,
      );
      return clock;
    });
    console.log(`\nOne core ÷ two: ${(clocks[0]! / clocks[1]!).toFixed(2)}`);
  } finally {
    cli.remove();
  }
}

const TICKS_A_SECOND = 100;

/** CPU seconds that the whole machine has worked: without idle and waiting. */
function busySeconds(): number {
  const [, user, nice, system, , , irq, softirq] = readFileSync('/proc/stat', 'utf8').split('\n')[0]!.split(/\s+/);
  return [user, nice, system, irq, softirq].reduce((sum, ticks) => sum + Number(ticks), 0) / TICKS_A_SECOND;
}
