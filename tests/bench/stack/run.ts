/**
 * The whole stack measured from outside: submit to verdict for a trivial question with an idle pool and with every worker
 * busy, 1,000 trivial questions posted one by one by a script, and the peak memory of each process.
 */
import { readFileSync } from 'node:fs';
import { execFileSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';
import { signIn, type Api } from '../../stack/api-client.ts';
import { ADMIN, startStack, until } from '../../stack/stack.ts';

const root = fileURLToPath(new URL('../../..', import.meta.url));
const databaseUrl = execFileSync('bash', ['docker-free-scripts/postgres.sh', 'start', '.palmette/test-postgres'], {
  cwd: root,
  encoding: 'utf8',
}).trim();
const stack = await startStack({ databaseUrl, schema: `bench_${process.pid}` });
const station = await stack.startStation('bench', 2);
const admin = await signIn(stack.url, ADMIN);
const study = (await admin.post<{ id: string }>('/studies', { title: 'Bench' })).id;

const trivial = (k: number) => ({
  format: 'palmette.question/1',
  source: { kind: 'fraction', p: 17, q: 5 },
  target: { dimension: 5 },
  scope: 'all',
  title: `trivial ${k}`,
});
const long = {
  format: 'palmette.question/1',
  source: { kind: 'sum', of: Array.from({ length: 4 }, () => ({ kind: 'fraction', p: 115, q: 24 })) },
  target: { excess: 4 },
  scope: 'all',
};

/** Milliseconds from the request to the settled answer, looking every 20 ms. */
async function settle(api: Api, k: number): Promise<number> {
  const before = performance.now();
  const { id } = await api.post<{ id: string }>(`/studies/${study}/questions`, trivial(k));
  for (;;) {
    const { state } = await api.get<{ state: string }>(`/questions/${id}`);
    if (state === 'settled') return performance.now() - before;
    await new Promise((resolve) => setTimeout(resolve, 20));
  }
}

const quantile = (list: readonly number[], q: number) =>
  Math.round([...list].sort((a, b) => a - b)[Math.min(list.length - 1, Math.floor(q * list.length))]!);

async function hundred(name: string): Promise<void> {
  const times: number[] = [];
  for (let k = 0; k < 100; k += 1) times.push(await settle(admin, k));
  console.log(
    `| submit to verdict, ${name}: median, p95 of 100 | ${quantile(times, 0.5)} ms, ${quantile(times, 0.95)} ms |`,
  );
}

/** VmHWM of a process, in MiB. */
function peak(pid: number): number {
  return Math.round(Number(/VmHWM:\s+(\d+)/.exec(readFileSync(`/proc/${pid}/status`, 'utf8'))?.[1] ?? 0) / 1024);
}

try {
  console.log('| what | figure |\n|---|---|');
  for (let k = 0; k < 10; k += 1) await settle(admin, k);
  await hundred('idle pool');
  const before = performance.now();
  for (let k = 0; k < 1_000; k += 1) await admin.post(`/studies/${study}/questions`, trivial(k));
  const posted = performance.now() - before;
  await until(
    'all are settled',
    async () =>
      (await admin.get<{ yours: { waiting: unknown[]; running: unknown[] } }>('/pool')).yours.waiting.length === 0,
    600,
  );
  console.log(
    `| 1,000 trivial questions posted one by one: posted, all settled | ${(posted / 1000).toFixed(1)} s, ${((performance.now() - before) / 1000).toFixed(1)} s |`,
  );
  const busy = await Promise.all([1, 2].map(() => admin.post<{ id: string }>(`/studies/${study}/questions`, long)));
  await until('every worker is busy', async () => (await admin.get<{ busy: number }>('/pool')).busy >= 2, 60);
  await hundred('every worker busy');
  for (const { id } of busy) await admin.post(`/questions/${id}/withdraw`);
  console.log(
    `| peak memory: server, station with two threads | ${peak(stack.serverPid)} MiB, ${peak(station.child.pid!)} MiB |`,
  );
} finally {
  await stack.stop();
}
