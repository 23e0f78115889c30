/** Two cores against one on one long search: the same question with the process kept on one core, then on two. */
import { listInstances } from '../peers/instances.ts';
import { bundleCommandLine } from '../peers/ours.ts';

const LIMIT_SECONDS = 600;

/** Takes a minute or more by rows. */
export function longQuestion(): object {
  const { document } = listInstances().find(({ name }) => name.startsWith('chain [5]^9'))!;
  return { ...document, source: { ...document.source }, target: { excess: 3 }, method: 'rows' };
}

export function cores(): void {
  const cli = bundleCommandLine();
  try {
    const document = JSON.stringify(longQuestion());
    console.log(`\n\`${document}\`\n\n| cores | clock, s | CPU, s | exit |\n|---|---|---|---|`);
    const clocks = ['0', '0,1'].map((cpus) => {
      const before = performance.now();
      const child = cli.answer(document, { cpuSeconds: LIMIT_SECONDS, cpus });
      const clock = (performance.now() - before) / 1000;
      console.log(
        `| ${cpus.split(',').length} | ${clock.toFixed(1)} | ${child.cpuSeconds.toFixed(1)} | ${child.status} |`,
      );
      return clock;
    });
    console.log(`\nOne core ÷ two: ${(clocks[0]! / clocks[1]!).toFixed(2)}`);
  } finally {
    cli.remove();
  }
}
