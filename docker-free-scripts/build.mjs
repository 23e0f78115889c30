/** Bundles the Node programs (server, station, their threads, the command line) and builds the client. */
import { build } from 'esbuild';
import { execFileSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { fileURLToPath } from 'node:url';

const root = fileURLToPath(new URL('..', import.meta.url));

const shared = {
  bundle: true,
  platform: 'node',
  format: 'esm',
  target: 'node20',
  conditions: ['source'],
  sourcemap: 'linked',
  logLevel: 'warning',
  absWorkingDir: root,
  tsconfigRaw: { compilerOptions: { experimentalDecorators: true, useDefineForClassFields: false } },
};

/** Packages of the registry stay outside the bundles, except for the command line, which has to start fast. */
export async function buildCli(outdir) {
  await build({
    ...shared,
    entryPoints: { palmette: 'apps/cli/src/main.ts', thread: 'packages/threads/src/thread.ts' },
    outdir,
    banner: {
      js: "import { createRequire as __createRequire } from 'node:module'; const require = __createRequire(import.meta.url);",
    },
    external: ['piscina'],
  });
}

async function buildPrograms() {
  for (const app of ['server', 'station']) {
    const threads = { server: 'apps/server/src/threads', station: '' }[app];
    const entryPoints = { main: `apps/${app}/src/main.ts` };
    if (app === 'station') entryPoints.thread = 'packages/threads/src/thread.ts';
    if (threads) {
      const { readdirSync } = await import('node:fs');
      if (existsSync(`${root}${threads}`))
        for (const f of readdirSync(`${root}${threads}`))
          if (f.endsWith('.ts') && !f.endsWith('.test.ts')) entryPoints[f.slice(0, -3)] = `${threads}/${f}`;
    }
    await build({ ...shared, entryPoints, outdir: `apps/${app}/dist`, packages: 'external', alias: await ours() });
  }
}

/** `packages: external` would leave our own workspaces out too; these are bundled. */
async function ours() {
  const { readdirSync } = await import('node:fs');
  return Object.fromEntries(
    readdirSync(`${root}packages`).map((name) => [`@palmette/${name}`, `${root}packages/${name}/src/index.ts`]),
  );
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  await buildPrograms();
  execFileSync('npx', ['vite', 'build', 'apps/web', '--logLevel', 'warn'], { cwd: root, stdio: 'inherit' });
}
